import knex, { type Knex } from 'knex';
import { knexConfig } from './knex-config';

/** A pool or a running transaction: repositories take either. */
export type Db = Knex;

export function openDatabase(filename: string): Db {
	return knex(knexConfig(filename));
}

/**
 * Runs `work` in one transaction. The pool holds one connection, so `work` must use the handle it is given
 * and never the outer one: that would wait for itself.
 */
export function withTransaction<T>(db: Db, work: (trx: Db) => Promise<T>): Promise<T> {
	return db.transaction((trx) => work(trx));
}
