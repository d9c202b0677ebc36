/** Run by global-setup in a process of its own: the two practices, before the product starts. */
import { prepareDatabase } from '../../../scripts/prepare-database';
import { buildContainer } from '../../../src/lib/server/container';
import { parseConfig } from '../../../src/lib/server/config';
import { hashPassword } from '../../../src/lib/server/auth/password';
import { withTransaction } from '../../../src/lib/server/db/database';
import { newId } from '../../../src/lib/server/db/ids';
import { addPerson, addPractice } from '../../../src/lib/server/services/practice-setup';
import { ALDER, BIRCH, PASSWORD } from './people';

const config = parseConfig(process.env);
await prepareDatabase(config.dataDir);
const container = buildContainer(config, 'script');
const now = new Date();
const passwordHash = await hashPassword(PASSWORD);

await withTransaction(container.db, async (trx) => {
	const alder = await addPractice(trx, ALDER.practice, now);
	for (const [person, role] of [
		[ALDER.owner, 'owner'],
		[ALDER.engineer, 'engineer'],
		[ALDER.checker, 'checker']
	] as const)
		await addPerson(trx, { ...person, practiceId: alder, role, clientId: null, passwordHash }, now);

	const birch = await addPractice(trx, BIRCH.practice, now);
	await addPerson(
		trx,
		{ ...BIRCH.owner, practiceId: birch, role: 'owner', clientId: null, passwordHash },
		now
	);
	const clientId = newId();
	await trx('clients').insert({
		id: clientId,
		practice_id: birch,
		name: BIRCH.client.name,
		created_at: now.toISOString()
	});
	await addPerson(
		trx,
		{ ...BIRCH.clientPerson, practiceId: birch, role: 'client', clientId, passwordHash },
		now
	);
});
await container.db.destroy();
