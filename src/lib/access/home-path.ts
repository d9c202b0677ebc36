import type { Actor } from './access';

/** The first page of a person's half of the product. */
export function homePath(actor: Pick<Actor, 'role'>): string {
	return actor.role === 'client' ? '/portal/reports' : '/desk';
}
