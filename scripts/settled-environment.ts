import { randomBytes } from 'node:crypto';
import { existsSync, mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { parseConfig } from '../src/lib/server/config';

/** Outside production a secret is made once and kept in the data folder, so that sessions outlive a restart. */
function keptSecret(dataDir: string): string {
	const file = join(dataDir, 'auth-secret');
	if (!existsSync(file)) {
		mkdirSync(dataDir, { recursive: true });
		writeFileSync(file, randomBytes(32).toString('hex'), { mode: 0o600 });
	}
	return readFileSync(file, 'utf8');
}

/** The environment both processes get: what was given, checked, plus what follows from it. */
export function settledEnvironment(given: NodeJS.ProcessEnv): NodeJS.ProcessEnv {
	const env = { ...given };
	const config = parseConfig(env);
	if (config.mode !== 'production') env['AUTH_SECRET'] ??= keptSecret(config.dataDir);
	env['HOST'] = config.host;
	env['PORT'] = String(config.port);
	env['ORIGIN'] = config.origin;
	env['AUTH_URL'] = config.origin;
	// The adapter's own limit; each route enforces its smaller one.
	env['BODY_SIZE_LIMIT'] = String(config.uploadLimit_bytes + 1024 * 1024);
	env['SHUTDOWN_TIMEOUT'] ??= '4';
	return env;
}
