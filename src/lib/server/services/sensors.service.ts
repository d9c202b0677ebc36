import type { Actor } from '../../access/access';
import type { SensorFacts } from '../../register/sensor-facts';
import { requireFound } from '../app-error';
import { appendAudit } from '../audit/audit-log';
import { requirePermission } from '../auth/require-permission';
import { withTransaction, type Db } from '../db/database';
import { listSensors, loadSensorPage, type SensorListQuery } from '../read-models/sensor-list';
import { scopeOf } from '../repositories/scope';
import { sensorsRepository, toSensorFacts } from '../repositories/sensors.repository';
import type { ServiceDeps } from '../service-deps';
import { queueReassessment } from './assessments/queue-reassessment';

/** Clamps, coils, transformers and leads of the practice: their ratios and errors go into readings and verdicts. */
export function createSensorsService({ db, clock, jobs }: ServiceDeps) {
	const today = () => clock().toISOString().slice(0, 10);

	async function note(
		trx: Db,
		actor: Actor,
		action: string,
		sensorId: string,
		detail: Record<string, unknown>
	): Promise<void> {
		await appendAudit(trx, actor, { action, subjectKind: 'sensor', subjectId: sensorId, detail }, clock());
	}

	return {
		async list(actor: Actor, query: SensorListQuery) {
			requirePermission(actor, 'register.read');
			return listSensors(db, scopeOf(actor), query, today());
		},

		async page(actor: Actor, sensorId: string) {
			requirePermission(actor, 'register.read');
			return requireFound(await loadSensorPage(db, scopeOf(actor), sensorId, today()), 'sensor');
		},

		/** For the choice at an instrument's input. */
		async choices(actor: Actor) {
			requirePermission(actor, 'register.read');
			const rows = await sensorsRepository(db, scopeOf(actor)).inUse();
			return rows.map((row) => ({ id: row.id, ...toSensorFacts(row) }));
		},

		async create(actor: Actor, facts: SensorFacts): Promise<string> {
			requirePermission(actor, 'register.write');
			return withTransaction(db, async (trx) => {
				const id = await sensorsRepository(trx, scopeOf(actor)).add(facts, clock().toISOString());
				await note(trx, actor, 'sensor.created', id, {
					name: facts.name,
					kind: facts.kind,
					serialNumber: facts.serialNumber
				});
				return id;
			});
		},

		/** Its errors go into the uncertainty of verdicts: the audit keeps both states. */
		async update(actor: Actor, sensorId: string, facts: SensorFacts): Promise<void> {
			requirePermission(actor, 'register.write');
			await withTransaction(db, async (trx) => {
				const sensors = sensorsRepository(trx, scopeOf(actor));
				const before = requireFound(await sensors.byId(sensorId), 'sensor');
				await sensors.update(sensorId, facts);
				for (const instrumentId of await sensors.instrumentIds(sensorId))
					await queueReassessment(trx, jobs, actor.practiceId, { instrumentId });
				await note(trx, actor, 'sensor.changed', sensorId, { before: toSensorFacts(before), after: facts });
			});
		},

		async setArchived(actor: Actor, sensorId: string, archived: boolean): Promise<void> {
			requirePermission(actor, 'register.write');
			await withTransaction(db, async (trx) => {
				const sensors = sensorsRepository(trx, scopeOf(actor));
				const sensor = requireFound(await sensors.byId(sensorId), 'sensor');
				await sensors.setArchived(sensorId, archived ? clock().toISOString() : null);
				await note(trx, actor, archived ? 'sensor.archived' : 'sensor.restored', sensorId, {
					name: sensor.name
				});
			});
		}
	};
}
