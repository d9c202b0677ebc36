/** Developer's start: Vite with hot reload, and the worker restarted when its sources change. */
import { parseConfig } from '../src/lib/server/config';
import { prepareDatabase } from './prepare-database';
import { runTogether } from './run-together';
import { settledEnvironment } from './settled-environment';

const port = process.env['PORT'] ?? '5173';
const env = settledEnvironment({
	SINEWRIGHT_MODE: 'development',
	DATA_DIR: 'data/development',
	...process.env,
	PORT: port
});
const config = parseConfig(env);
await prepareDatabase(config.dataDir);
await runTogether(
	[
		{
			name: 'web',
			command: 'npx',
			args: ['vite', 'dev', '--host', config.host, '--port', port, '--strictPort']
		},
		{ name: 'worker', command: 'npx', args: ['tsx', 'watch', 'src/lib/server/worker/main.ts'] }
	],
	env,
	`http://${config.host}:${port}/healthz`,
	() => console.log(`Sinewright (development) is at ${config.origin}`)
);
