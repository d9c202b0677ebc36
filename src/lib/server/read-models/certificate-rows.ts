import type { CalibrationRow } from '../db/rows';

/** A certificate as its list shows it. */
export interface CertificateRow {
	id: string;
	certificateNumber: string;
	laboratory: string;
	calibratedOn: string;
	dueOn: string;
	note: string;
	/** Null where only the certificate's figures were entered. */
	fileName: string | null;
}

export function certificateRows(calibrations: readonly CalibrationRow[]): CertificateRow[] {
	return calibrations.map((row) => ({
		id: row.id,
		certificateNumber: row.certificate_number,
		laboratory: row.laboratory,
		calibratedOn: row.calibrated_on,
		dueOn: row.due_on,
		note: row.note,
		fileName: row.certificate_file_name
	}));
}
