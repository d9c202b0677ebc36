import type { Db } from '../db/database';
import type { Scope } from './scope';

/** Counters of one practice: survey numbers, and report numbers of a year. */
export function numberSequencesRepository(trx: Db, scope: Pick<Scope, 'practiceId'>) {
	return {
		/**
		 * The next number of a series, counted from 1. Call it inside the transaction that uses the number: when
		 * that is rolled back the number is not spent, and no two can get the same.
		 */
		async next(name: string): Promise<number> {
			await trx('number_sequences')
				.insert({ practice_id: scope.practiceId, name, last_value: 1 })
				.onConflict(['practice_id', 'name'])
				.merge({ last_value: trx.raw('number_sequences.last_value + 1') as unknown as number });
			const row = await trx('number_sequences').where({ practice_id: scope.practiceId, name }).first();
			if (!row) throw new Error(`the sequence ${name} was not written`);
			return row.last_value;
		}
	};
}
