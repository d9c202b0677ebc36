import type { Actor } from '../../access/access';

/** For whom a repository or read model acts; nothing outside it can be seen or changed. */
export interface Scope {
	practiceId: string;
	/** Set when a client acts: only that organisation's rows. */
	clientId?: string;
}

export function scopeOf(actor: Pick<Actor, 'practiceId' | 'clientId'>): Scope {
	return actor.clientId === null
		? { practiceId: actor.practiceId }
		: { practiceId: actor.practiceId, clientId: actor.clientId };
}
