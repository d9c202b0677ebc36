import type { CalibrationFacts } from '../../register/instrument-facts';
import type { CertificateSpan } from '../../register/calibration-validity';
import type { Db } from '../db/database';
import { newId } from '../db/ids';
import type { CalibrationRow } from '../db/rows';
import type { Scope } from './scope';

/** What a certificate is of. */
export type CalibrationSubject = { instrumentId: string } | { sensorId: string };

export interface CertificateFile {
	sha256: string;
	name: string;
}

export function toCertificateSpan(row: CalibrationRow): CertificateSpan {
	return { certificateNumber: row.certificate_number, calibratedOn: row.calibrated_on, dueOn: row.due_on };
}

/** Calibrations of the practice's instruments and sensors; no client sees them. */
export function calibrationsRepository(db: Db, scope: Pick<Scope, 'practiceId'>) {
	const mine = () => db('calibrations').where({ practice_id: scope.practiceId });

	return {
		byId: (id: string): Promise<CalibrationRow | undefined> => mine().where({ id }).first(),

		/** The last one first. */
		ofInstruments: (ids: readonly string[]): Promise<CalibrationRow[]> =>
			mine().whereIn('instrument_id', ids).orderBy('calibrated_on', 'desc').orderBy('created_at', 'desc'),

		ofSensors: (ids: readonly string[]): Promise<CalibrationRow[]> =>
			mine().whereIn('sensor_id', ids).orderBy('calibrated_on', 'desc').orderBy('created_at', 'desc'),

		async add(
			subject: CalibrationSubject,
			facts: CalibrationFacts,
			file: CertificateFile | null,
			at: string
		): Promise<string> {
			const id = newId();
			await db('calibrations').insert({
				id,
				practice_id: scope.practiceId,
				instrument_id: 'instrumentId' in subject ? subject.instrumentId : null,
				sensor_id: 'sensorId' in subject ? subject.sensorId : null,
				certificate_number: facts.certificateNumber,
				laboratory: facts.laboratory,
				calibrated_on: facts.calibratedOn,
				due_on: facts.dueOn,
				note: facts.note,
				certificate_sha256: file?.sha256 ?? null,
				certificate_file_name: file?.name ?? null,
				created_at: at
			});
			return id;
		}
	};
}
