import type { Actor } from '../../access/access';
import { requirePermission } from '../auth/require-permission';
import { searchPractice } from '../read-models/search';
import { scopeOf } from '../repositories/scope';
import type { ServiceDeps } from '../service-deps';
import { clientUseCases } from './register/clients';
import { pointUseCases } from './register/points';
import { siteUseCases } from './register/sites';

/** Clients, their sites and the points measured there; and the search over all of a practice's work. */
export function createRegisterService(deps: ServiceDeps) {
	return {
		...clientUseCases(deps),
		...siteUseCases(deps),
		...pointUseCases(deps),

		async search(actor: Actor, q: string) {
			requirePermission(actor, 'register.read');
			return searchPractice(deps.db, scopeOf(actor), q);
		}
	};
}
