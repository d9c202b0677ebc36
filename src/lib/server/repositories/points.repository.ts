import type { PointFacts } from '../../register/point-facts';
import type { Db } from '../db/database';
import { newId } from '../db/ids';
import type { PointRow, SiteRow } from '../db/rows';
import type { Scope } from './scope';

function columns(facts: PointFacts) {
	return {
		name: facts.name,
		kind: facts.kind,
		system: facts.system,
		nominal_voltage_v: facts.nominalVoltage_V,
		nominal_frequency_hz: facts.nominalFrequency_Hz,
		demand_json: JSON.stringify(facts.demand),
		short_circuit_json: JSON.stringify(facts.shortCircuit),
		phase_names_json: JSON.stringify(facts.phaseNames),
		ct_primary_a: facts.currentTransformer?.primary ?? null,
		ct_secondary_a: facts.currentTransformer?.secondary ?? null,
		vt_primary_v: facts.voltageTransformer?.primary ?? null,
		vt_secondary_v: facts.voltageTransformer?.secondary ?? null,
		limit_set_id: facts.limitSetId,
		limit_set_reason: facts.limitSetReason,
		notes: facts.notes
	};
}

export function pointsRepository(db: Db, scope: Scope) {
	const mine = () => {
		const query = db('points').where({ practice_id: scope.practiceId });
		return scope.clientId === undefined ? query : query.andWhere({ client_id: scope.clientId });
	};

	return {
		byId: (id: string): Promise<PointRow | undefined> => mine().where({ id }).first(),

		ofSite: (siteId: string, id: string): Promise<PointRow | undefined> =>
			mine().where({ site_id: siteId, id }).first(),

		async add(site: Pick<SiteRow, 'id' | 'client_id'>, facts: PointFacts, at: string): Promise<string> {
			const id = newId();
			await db('points').insert({
				id,
				practice_id: scope.practiceId,
				client_id: site.client_id,
				site_id: site.id,
				...columns(facts),
				created_at: at,
				updated_at: at,
				archived_at: null
			});
			return id;
		},

		async update(id: string, facts: PointFacts, at: string): Promise<void> {
			await mine()
				.where({ id })
				.update({ ...columns(facts), updated_at: at });
		},

		async setArchived(id: string, at: string | null): Promise<void> {
			await mine().where({ id }).update({ archived_at: at });
		}
	};
}
