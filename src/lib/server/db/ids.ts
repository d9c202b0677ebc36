import { randomUUID } from 'node:crypto';

/** Identifier of a new row; random, so that it tells nothing and cannot be counted through. */
export function newId(): string {
	return randomUUID();
}
