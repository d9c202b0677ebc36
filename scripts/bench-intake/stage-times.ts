import Database from 'better-sqlite3';
import { databaseFile } from '../../src/lib/server/db/database-file';

/** Stages from the choosing of the files to the readings, in order, in seconds. */
export interface StageTimes {
	/** Until the last byte is stored and its hash is known. */
	upload: number;
	/** What the files hold is recognised, waiting for the worker included. */
	recognition: number;
	/** A person looks at the channels; here a program that does not think. */
	confirmation: number;
	analysis: number;
	verdict: number;
	/** Until the first picture of the readings stands, from the end of the analysis. */
	readings: number;
}

interface JobTimes {
	created_at: string;
	finished_at: string;
}

/** chosen_ms, shown_ms  clock when the files were chosen and when the readings stood */
export function stageTimes(dataDir: string, chosen_ms: number, shown_ms: number): StageTimes {
	const db = new Database(databaseFile({ DATA_DIR: dataDir }), { readonly: true });
	const times = (kind: string) => {
		const row = db
			.prepare<string, JobTimes>(
				`select created_at, finished_at from jobs where kind = ? and status = 'done' order by created_at`
			)
			.get(kind);
		if (!row) throw new Error(`No job “${kind}” came to its end.`);
		return { created_ms: Date.parse(row.created_at), finished_ms: Date.parse(row.finished_at) };
	};
	const recognised = times('recognise-capture');
	const analysed = times('analyse-capture');
	const assessed = times('assess-survey');
	db.close();
	const seconds = (from_ms: number, to_ms: number) => (to_ms - from_ms) / 1000;
	return {
		upload: seconds(chosen_ms, recognised.created_ms),
		recognition: seconds(recognised.created_ms, recognised.finished_ms),
		confirmation: seconds(recognised.finished_ms, analysed.created_ms),
		analysis: seconds(analysed.created_ms, analysed.finished_ms),
		verdict: seconds(assessed.created_ms, assessed.finished_ms),
		readings: seconds(analysed.finished_ms, shown_ms)
	};
}
