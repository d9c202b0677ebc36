import type { Content } from 'pdfmake/interfaces';
import { formatCalendarDate } from '../../../report/dates';
import { formatNumber } from '../../../units/format';
import type { SheetContext } from '../sheet-context';
import { equipmentPart } from './equipment';
import { facts, heading, paragraph, ruledTable, soft } from '../typeset';

function calibrationStatement(context: SheetContext): string {
	const instrument = context.model.instrument;
	if (instrument === null) return '';
	if (instrument.calibratedDuringSurvey === null)
		return 'The captures do not tell when they were taken, or no calibration is recorded: whether a calibration was in force cannot be shown.';
	return instrument.calibratedDuringSurvey
		? 'A calibration was in force over the whole of the measurement.'
		: 'No recorded calibration was in force over the whole of the measurement. Read the uncertainty with this in mind.';
}

export function instrumentsSection(context: SheetContext): Content[] {
	const { instrument, equipment, method, site } = context.model;
	const uncertainty: Content[] = [
		...heading('Measurement uncertainty'),
		paragraph(method.uncertaintyText),
		...(method.uncertaintyAtOrders.length === 0
			? []
			: [
					ruledTable(
						[
							{ head: 'Order', width: 60 },
							{ head: 'Voltage, % of reading', width: 120, align: 'right', mono: true },
							{ head: 'Current, % of reading', width: 120, align: 'right', mono: true },
							{ head: '', width: '*' }
						],
						method.uncertaintyAtOrders.map((row) => [
							String(row.order),
							row.voltage_pct === null ? 'not known' : formatNumber(row.voltage_pct),
							row.current_pct === null ? 'not known' : formatNumber(row.current_pct),
							''
						])
					),
					soft(
						'Expanded uncertainty, coverage factor k = 2, of a single order well above the recorder’s floor and at rated load.'
					)
				])
	];
	if (equipment !== undefined && equipment.length > 0)
		return [...equipment.flatMap((one) => equipmentPart(one, site.timeZone)), ...uncertainty];
	if (instrument === null)
		return [
			paragraph(
				'No instrument is recorded for this survey. Its class and calibration are therefore not known.'
			),
			...uncertainty
		];
	return [
		facts([
			['Instrument', [instrument.name, instrument.model].filter(Boolean).join(', ')],
			['Serial number', instrument.serialNumber || 'not given'],
			[
				'Class for harmonics (IEC 61000-4-7)',
				instrument.harmonicClass === 'unknown' ? 'not known' : `class ${instrument.harmonicClass}`
			],
			['Sensors', instrument.sensors || 'not given']
		]),
		...heading('Calibration'),
		instrument.calibrations.length === 0
			? soft('No calibration is recorded.')
			: ruledTable(
					[
						{ head: 'Certificate', width: '*' },
						{ head: 'Laboratory', width: 150 },
						{ head: 'Calibrated', width: 92 },
						{ head: 'Due', width: 92 }
					],
					instrument.calibrations.map((c) => [
						c.certificate,
						c.laboratory || 'not given',
						formatCalendarDate(c.calibratedOn),
						formatCalendarDate(c.dueOn)
					])
				),
		paragraph(calibrationStatement(context)),
		...uncertainty
	];
}
