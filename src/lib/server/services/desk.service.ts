import { can, type Actor } from '../../access/access';
import { requirePermission } from '../auth/require-permission';
import { desk } from '../read-models/desk';
import type { ServiceDeps } from '../service-deps';

export function createDeskService({ db, clock }: ServiceDeps) {
	/** What needs this person today. */
	async function today(actor: Actor) {
		requirePermission(actor, 'register.read');
		return desk(
			db,
			actor.practiceId,
			{ userId: actor.userId, mayCheck: can(actor, 'report.check') },
			clock()
		);
	}
	return { today };
}
