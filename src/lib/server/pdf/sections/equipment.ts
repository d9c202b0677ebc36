import type { Content } from 'pdfmake/interfaces';
import { SENSOR_KIND_WORDS } from '../../../register/sensor-facts';
import { tidyAngle, tidyFrequency } from '../../../register/sensor-form';
import { formatSensorRatio } from '../../../register/sensor-ratio';
import { tidyQuantity } from '../../../register/tidy-quantity';
import { formatCalendarDate, formatShortDay } from '../../../report/dates';
import type {
	ReportCertificate,
	ReportEquipment,
	ReportSensor,
	ReportValidity
} from '../../../report/equipment';
import { formatPct } from '../../../units/format';
import { facts, heading, paragraph, ruledTable, soft } from '../typeset';

const NOT_KNOWN = 'not known';

const VALIDITY_WORDS: Record<Exclude<ReportValidity, null>, string> = {
	valid: 'in force',
	expired: 'expired',
	'not-yet': 'only afterwards',
	none: 'no certificate'
};
const validityWords = (validity: ReportValidity): string =>
	validity === null ? 'time not known' : VALIDITY_WORDS[validity];

const STATEMENTS: Record<Exclude<ReportValidity, null>, (name: string) => string> = {
	valid: (name) => `A calibration of ${name} was in force over the whole of the measurement.`,
	expired: (name) =>
		`The calibration of ${name} had expired during the measurement. Read the uncertainty with this in mind.`,
	'not-yet': (name) =>
		`${name} was calibrated only after the measurement. Read the uncertainty with this in mind.`,
	none: (name) => `No calibration of ${name} is recorded: what it measured cannot be traced to a standard.`
};

function statement(name: string, validity: ReportValidity): string {
	return validity === null
		? `The captures do not tell when they were taken: whether a calibration of ${name} was in force cannot be shown.`
		: STATEMENTS[validity](name);
}

function inputsTable({ inputs }: ReportEquipment): Content {
	return ruledTable(
		[
			{ head: 'Input', width: 70, mono: true },
			{ head: 'Measures', width: 70 },
			{ head: 'Range, rms', width: 80, align: 'right', mono: true },
			{ head: 'Resolution', width: 80, align: 'right', mono: true },
			{ head: 'Sensor', width: '*' }
		],
		inputs.map((input) => [
			input.name,
			input.quantity,
			input.rangeRms === null
				? NOT_KNOWN
				: tidyQuantity(input.rangeUnit === 'V' ? 'voltage' : 'current', input.rangeRms),
			input.resolution_bits === null ? NOT_KNOWN : `${input.resolution_bits} bit`,
			input.sensor ?? 'none, measured directly'
		])
	);
}

function sensorRow(sensor: ReportSensor): (string | Content)[] {
	return [
		`${sensor.name}, ${SENSOR_KIND_WORDS[sensor.kind]}`,
		sensor.serialNumber || 'not given',
		sensor.ratio === null ? NOT_KNOWN : formatSensorRatio(sensor.kind, sensor.ratio),
		sensor.accuracyClass || NOT_KNOWN,
		sensor.ratioError_pct === null ? NOT_KNOWN : formatPct(sensor.ratioError_pct),
		sensor.phaseError_deg === null ? NOT_KNOWN : tidyAngle(sensor.phaseError_deg),
		sensor.highestFrequency_Hz === null ? NOT_KNOWN : tidyFrequency(sensor.highestFrequency_Hz)
	];
}

function sensorsTable(sensors: readonly ReportSensor[]): Content {
	return ruledTable(
		[
			{ head: 'Sensor', width: '*' },
			{ head: 'Serial number', width: 66, mono: true },
			{ head: 'Ratio', width: 92, mono: true },
			{ head: 'Class', width: 48, mono: true },
			{ head: 'Ratio error', width: 50, align: 'right', mono: true },
			{ head: 'Phase error', width: 50, align: 'right', mono: true },
			{ head: 'Usable to', width: 48, align: 'right', mono: true }
		],
		sensors.map(sensorRow)
	);
}

function certificatesTable(
	subjects: readonly { name: string; certificates: readonly ReportCertificate[]; validity: ReportValidity }[]
): Content {
	return ruledTable(
		[
			{ head: 'Of', width: 72 },
			{ head: 'Certificate', width: 66, mono: true },
			{ head: 'Laboratory', width: '*' },
			{ head: 'Calibrated', width: 70 },
			{ head: 'Due', width: 70 },
			{ head: 'At the captures', width: 64 }
		],
		subjects.flatMap(({ name, certificates, validity }) =>
			certificates.length === 0
				? [[name, '–', 'no certificate on record', '–', '–', validityWords('none')]]
				: certificates.map((one, i) => [
						i === 0 ? name : '',
						one.certificate,
						one.laboratory || 'not given',
						formatCalendarDate(one.calibratedOn),
						formatCalendarDate(one.dueOn),
						i === 0 ? validityWords(validity) : ''
					])
		)
	);
}

/** One instrument of the report: what it is, what it measured through, its certificates and what they mean. */
export function equipmentPart(equipment: ReportEquipment, timeZone: string): Content[] {
	const { captures, inputs, sensors } = equipment;
	const recorded = captures.map(({ name, startedAt }) =>
		startedAt === null ? name : `${name} (${formatShortDay(startedAt, timeZone)})`
	);
	return [
		...heading(equipment.name),
		facts([
			['Model', equipment.model || 'not given'],
			['Serial number', equipment.serialNumber || 'not given'],
			[
				'Class for harmonics (IEC 61000-4-7)',
				equipment.harmonicClass === 'unknown' ? NOT_KNOWN : `class ${equipment.harmonicClass}`
			],
			...(inputs.length > 0
				? []
				: ([
						['Channels', equipment.channelsInWords || 'not given'],
						['Sensors', equipment.sensorsInWords || 'not given']
					] as const)),
			['Recorded', recorded.join('; ') || 'nothing that is analysed']
		]),
		...(inputs.length === 0 ? [] : [inputsTable(equipment)]),
		...(sensors.length === 0 ? [] : [sensorsTable(sensors)]),
		certificatesTable([equipment, ...sensors]),
		paragraph(
			[equipment, ...sensors.filter((sensor) => sensor.validity !== 'valid')]
				.map(({ name, validity }) => statement(name, validity))
				.join(' ')
		),
		...(inputs.length === 0 ? [soft('The inputs of this instrument are not listed one by one.')] : [])
	];
}
