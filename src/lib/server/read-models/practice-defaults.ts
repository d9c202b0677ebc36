import { phaseNamesSchema } from '../../register/point-facts';
import type { PhaseNames } from '../../recording/phase';
import type { Db } from '../db/database';
import type { Scope } from '../repositories/scope';

/** What a practice uses unless told otherwise. */
export async function practiceDefaults(
	db: Db,
	scope: Pick<Scope, 'practiceId'>
): Promise<{ timeZone: string; phaseNames: PhaseNames }> {
	const row = await db('practices').where({ id: scope.practiceId }).first('time_zone', 'phase_names_json');
	if (!row) throw new Error('the acting practice has no row');
	return { timeZone: row.time_zone, phaseNames: phaseNamesSchema.parse(JSON.parse(row.phase_names_json)) };
}
