/**
 * Production start: brings the database up to date, then runs web server and analysis worker together.
 * They start together, stop together on SIGTERM or SIGINT, and when one dies the other follows,
 * so that a service manager sees one thing that is either up or down.
 */
import { existsSync } from 'node:fs';
import { PRODUCT_PROGRAMS } from './product-programs';
import { runTogether } from './run-together';
import { prepareDatabase } from './prepare-database';
import { parseConfig } from '../src/lib/server/config';
import { settledEnvironment } from './settled-environment';

if (!existsSync('build/index.js') || !existsSync('build/worker/main.js')) {
	console.error(
		'There is no build yet. Run "npm run build" first, or "npm run demo", which does everything.'
	);
	process.exit(2);
}

const env = settledEnvironment(process.env);
try {
	const config = parseConfig(env);
	await prepareDatabase(config.dataDir);
	await runTogether(
		PRODUCT_PROGRAMS,
		env,
		`${config.origin}/healthz`.replace(config.origin, `http://${config.host}:${config.port}`)
	);
} catch (cause) {
	console.error(cause instanceof Error ? cause.message : cause);
	process.exit(2);
}
