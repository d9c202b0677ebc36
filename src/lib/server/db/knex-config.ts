import type { Knex } from 'knex';

interface RawConnection {
	pragma(statement: string): unknown;
}

/**
 * One configuration for application, worker, command line and tests.
 * WAL lets the web process read while the worker writes; the busy timeout covers the moment both write.
 */
export function knexConfig(filename: string): Knex.Config {
	const inMemory = filename === ':memory:';
	return {
		client: 'better-sqlite3',
		connection: { filename },
		useNullAsDefault: true,
		pool: {
			min: inMemory ? 1 : 0,
			max: 1,
			afterCreate(connection: RawConnection, done: (error: Error | null, connection: RawConnection) => void) {
				connection.pragma('journal_mode = WAL');
				connection.pragma('synchronous = NORMAL');
				connection.pragma('foreign_keys = ON');
				connection.pragma('busy_timeout = 8000');
				done(null, connection);
			}
		}
	};
}
