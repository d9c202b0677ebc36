import { hashPassword } from '../../src/lib/server/auth/password';
import { parseConfig } from '../../src/lib/server/config';
import { buildContainer } from '../../src/lib/server/container';
import { withTransaction } from '../../src/lib/server/db/database';
import { newId } from '../../src/lib/server/db/ids';
import { addPerson, addPractice } from '../../src/lib/server/services/practice-setup';
import { prepareDatabase } from '../prepare-database';

export const ENGINEER = {
	name: 'Tom Engelhart',
	email: 'tom@alder.example',
	password: 'a password for measuring only'
};

/** A fresh data folder with one engineer and an open survey at a 400 V point. returns  the survey's id */
export async function surveyForUpload(env: NodeJS.ProcessEnv): Promise<string> {
	const config = parseConfig(env);
	await prepareDatabase(config.dataDir);
	const { db } = buildContainer(config, 'script');
	const now = new Date();
	const at = now.toISOString();
	const passwordHash = await hashPassword(ENGINEER.password);
	const ids = { client: newId(), site: newId(), point: newId(), survey: newId() };
	await withTransaction(db, async (trx) => {
		const practiceId = await addPractice(
			trx,
			{ name: 'Alder Measurement', shortName: 'Alder', reportPrefix: 'AM', timeZone: 'Europe/Berlin' },
			now
		);
		const { userId } = await addPerson(
			trx,
			{
				practiceId,
				name: ENGINEER.name,
				email: ENGINEER.email,
				role: 'engineer',
				clientId: null,
				passwordHash
			},
			now
		);
		const own = { practice_id: practiceId, client_id: ids.client, created_at: at };
		await trx('clients').insert({
			id: ids.client,
			practice_id: practiceId,
			name: 'Millbrook Paper',
			created_at: at
		});
		await trx('sites').insert({ ...own, id: ids.site, name: 'Weir Street', time_zone: 'Europe/Berlin' });
		await trx('points').insert({
			...own,
			id: ids.point,
			site_id: ids.site,
			name: 'Main switchboard',
			kind: 'pcc',
			system: 'four-wire',
			nominal_voltage_v: 400,
			nominal_frequency_hz: 50,
			demand_json: JSON.stringify({ method: 'entered', demandCurrent_A: 160, source: 'nameplate' }),
			short_circuit_json: JSON.stringify({ method: 'unknown' }),
			phase_names_json: JSON.stringify({ L1: 'L1', L2: 'L2', L3: 'L3', N: 'N' }),
			updated_at: at
		});
		await trx('surveys').insert({
			...own,
			id: ids.survey,
			site_id: ids.site,
			point_id: ids.point,
			number: 'S-1',
			title: 'A long capture',
			engineer_id: userId,
			updated_at: at
		});
	});
	await db.destroy();
	return ids.survey;
}
