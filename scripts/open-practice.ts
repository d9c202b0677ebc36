/**
 * npm run open-practice -- --name "Tarn & Holloway Power Engineers" --short-name "Tarn & Holloway" --prefix TH
 *   --time-zone Europe/London --owner "Judith Holloway" --email judith@example.com
 *
 * Opens a practice with its first owner and prints the link by which the owner chooses a password. Only somebody with
 * access to the machine can open a practice; everybody else is invited from within it.
 */
import { parseArgs } from 'node:util';
import { z } from 'zod';
import { parseConfig } from '../src/lib/server/config';
import { buildContainer } from '../src/lib/server/container';
import { hashToken, newToken } from '../src/lib/server/auth/tokens';
import { withTransaction } from '../src/lib/server/db/database';
import { addPerson, addPractice } from '../src/lib/server/services/practice-setup';
import { prepareDatabase } from './prepare-database';
import { settledEnvironment } from './settled-environment';

const LINK_VALID_MS = 7 * 86_400_000;

const wanted = z.object({
	name: z.string().min(2, '--name: the full name of the practice'),
	'short-name': z.string().min(2, '--short-name: the name as it stands in narrow places'),
	prefix: z
		.string()
		.regex(/^[A-Z]{1,6}$/, '--prefix: one to six capital letters, the first part of report numbers'),
	'time-zone': z
		.string()
		.refine(
			(zone) => Intl.supportedValuesOf('timeZone').includes(zone) || zone === 'UTC',
			'--time-zone: an IANA zone, e.g. Europe/London'
		),
	owner: z.string().min(3, '--owner: the name of the first owner'),
	email: z.email('--email: the address of the first owner')
});

const { values } = parseArgs({
	options: Object.fromEntries(Object.keys(wanted.shape).map((key) => [key, { type: 'string' as const }]))
});
const parsed = wanted.safeParse(
	Object.fromEntries(Object.keys(wanted.shape).map((key) => [key, values[key] ?? '']))
);
if (!parsed.success) {
	console.error(`Needed:\n${parsed.error.issues.map((issue) => `  ${issue.message}`).join('\n')}`);
	process.exit(2);
}
const given = parsed.data;
const config = parseConfig(settledEnvironment(process.env));
await prepareDatabase(config.dataDir);
const container = buildContainer(config, 'script');
const now = new Date();
const token = newToken();
try {
	await withTransaction(container.db, async (trx) => {
		const practiceId = await addPractice(
			trx,
			{
				name: given.name,
				shortName: given['short-name'],
				reportPrefix: given.prefix,
				timeZone: given['time-zone']
			},
			now
		);
		const { userId } = await addPerson(
			trx,
			{
				practiceId,
				name: given.owner,
				email: given.email,
				role: 'owner',
				clientId: null,
				passwordHash: null
			},
			now
		);
		await trx('password_resets').insert({
			token_hash: hashToken(token),
			user_id: userId,
			created_at: now.toISOString(),
			expires_at: new Date(now.getTime() + LINK_VALID_MS).toISOString()
		});
	});
	console.log(
		`${given.name} is open. ${given.owner} chooses a password within seven days at\n${config.origin}/reset/${token}`
	);
} finally {
	await container.db.destroy();
}
