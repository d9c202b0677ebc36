import { fileURLToPath } from 'node:url';
import { knexConfig } from './src/lib/server/db/knex-config.ts';
import { databaseFile } from './src/lib/server/db/database-file.ts';

// Used by the knex command line (migrations and seeds). The application opens its own pool from the same config.
export default {
	...knexConfig(databaseFile(process.env)),
	migrations: {
		directory: fileURLToPath(new URL('./migrations', import.meta.url)),
		extension: 'ts',
		loadExtensions: ['.ts']
	},
	seeds: {
		directory: fileURLToPath(new URL('./seeds', import.meta.url)),
		extension: 'ts',
		loadExtensions: ['.ts']
	}
};
