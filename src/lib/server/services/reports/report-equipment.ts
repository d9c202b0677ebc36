import { calibrationValidityDuring } from '../../../register/calibration-validity';
import {
	worstValidity,
	type ReportCertificate,
	type ReportEquipment,
	type ReportSensor,
	type ReportValidity
} from '../../../report/equipment';
import type { Db } from '../../db/database';
import type { CalibrationRow, CaptureRow } from '../../db/rows';
import { surveyEquipment, type Equipment, type EquipmentInput } from '../../read-models/survey-equipment';
import { calibrationsRepository, toCertificateSpan } from '../../repositories/calibrations.repository';
import type { Scope } from '../../repositories/scope';

function certificateOf(row: CalibrationRow): ReportCertificate {
	return {
		certificate: row.certificate_number,
		laboratory: row.laboratory,
		calibratedOn: row.calibrated_on,
		dueOn: row.due_on
	};
}

function validityAt(rows: readonly CalibrationRow[], capture: CaptureRow, timeZone: string): ReportValidity {
	if (capture.started_at === null) return rows.length === 0 ? 'none' : null;
	return calibrationValidityDuring(
		rows.map(toCertificateSpan),
		{ start_ms: Date.parse(capture.started_at), duration_s: capture.duration_s },
		timeZone
	).state;
}

function sensorsOf(
	{ usedInputs, captures }: Equipment,
	calibrations: readonly CalibrationRow[],
	timeZone: string
): ReportSensor[] {
	const plugged = new Map(
		usedInputs.flatMap(({ sensor }) => (sensor ? [[sensor.id, sensor.facts] as const] : []))
	);
	return [...plugged].map(([id, { notes: _notes, ...facts }]) => {
		const own = calibrations.filter((row) => row.sensor_id === id);
		return {
			...facts,
			certificates: own.map(certificateOf),
			validity: worstValidity(captures.map((capture) => validityAt(own, capture, timeZone)))
		};
	});
}

const inputOf = ({ row, sensor }: EquipmentInput): ReportEquipment['inputs'][number] => ({
	name: row.name,
	quantity: row.quantity,
	rangeRms: row.range_rms,
	rangeUnit: row.range_unit,
	resolution_bits: row.resolution_bits,
	sensor: sensor?.facts.name ?? null
});

/** What the captures of a report were taken with, and whether it was calibrated then, by the calendar of the site. */
export async function equipmentOf(
	db: Db,
	scope: Scope,
	surveyId: string,
	captures: readonly CaptureRow[],
	timeZone: string
): Promise<ReportEquipment[]> {
	const calibrations = calibrationsRepository(db, scope);
	const found: ReportEquipment[] = [];
	for (const one of await surveyEquipment(db, scope, surveyId, captures)) {
		const own = await calibrations.ofInstruments([one.instrument.id]);
		const ofSensors = await calibrations.ofSensors(one.usedInputs.flatMap(({ sensor }) => sensor?.id ?? []));
		const taken = one.captures.map((capture) => ({
			name: capture.name,
			startedAt: capture.started_at,
			validity: validityAt(own, capture, timeZone)
		}));
		found.push({
			name: one.instrument.name,
			model: one.instrument.model,
			serialNumber: one.instrument.serial_number,
			harmonicClass: one.instrument.harmonic_class,
			channelsInWords: one.instrument.channels,
			sensorsInWords: one.instrument.sensors,
			inputs: one.usedInputs.map(inputOf),
			sensors: sensorsOf(one, ofSensors, timeZone),
			certificates: own.map(certificateOf),
			validity: worstValidity(taken.map((capture) => capture.validity)),
			captures: taken
		});
	}
	return found;
}
