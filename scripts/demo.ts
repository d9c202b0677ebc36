/** Prepares the demo practice in its own data folder, once, then runs the product on it. */
import { existsSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { buildContainer } from '../src/lib/server/container';
import { parseConfig } from '../src/lib/server/config';
import { CLIENTS, DEMO_PASSWORD, STAFF } from '../seeds/demo/people';
import { seedDemo } from '../seeds/demo/seed-demo';
import { prepareDatabase } from './prepare-database';
import { PRODUCT_PROGRAMS } from './product-programs';
import { runTogether } from './run-together';
import { settledEnvironment } from './settled-environment';

const fresh = process.argv.includes('--fresh');
const onlySeed = process.argv.includes('--seed-only');
const given = { SINEWRIGHT_MODE: 'demo', DATA_DIR: 'data/demo', LOG_LEVEL: 'warn', ...process.env };
const dataDir = given.DATA_DIR;
if (fresh) rmSync(dataDir, { recursive: true, force: true });

const env = settledEnvironment(given);
const config = parseConfig(env);
const seeded = join(dataDir, 'seeded');

if (!existsSync(seeded)) {
	// A seeding that was cut short is started over: half a story helps nobody.
	rmSync(join(dataDir, 'sinewright.sqlite'), { force: true });
	console.log('Preparing the demo practice …');
	await prepareDatabase(dataDir);
	await seedDemo((overrides) => buildContainer(config, 'script', overrides), seeded, console.log);
} else {
	await prepareDatabase(dataDir);
}
if (onlySeed) process.exit(0);

function announce(): void {
	const line = (name: string, role: string, email: string) =>
		`  ${name.padEnd(20)} ${role.padEnd(30)} ${email}`;
	console.log(
		[
			'',
			`Sinewright is at ${config.origin}`,
			'',
			`Sign in with any of these; the password is always:  ${DEMO_PASSWORD}`,
			'',
			...Object.values(STAFF).map((person) => line(person.name, person.role, person.email)),
			...Object.values(CLIENTS).map((client) =>
				line(client.person.name, `client, ${client.name}`, client.person.email)
			),
			'',
			`Mail that the product sends is at ${config.origin}/mailbox`,
			'Stop with Ctrl-C. "npm run demo -- --fresh" starts the story over.',
			''
		].join('\n')
	);
}

await runTogether(PRODUCT_PROGRAMS, env, `http://${config.host}:${config.port}/healthz`, announce);
