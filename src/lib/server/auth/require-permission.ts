import { can, type Action, type Actor } from '../../access/access';
import { AppError } from '../app-error';

/** First line of every use case. Throws `forbidden` when the actor's role does not include the action. */
export function requirePermission(actor: Actor, action: Action): void {
	if (!can(actor, action))
		throw new AppError(
			'forbidden',
			`Your role (${actor.role}) does not allow this. Ask the owner of the practice.`
		);
}

/** As requirePermission, where any one of several actions is enough. */
export function requireAnyPermission(actor: Actor, actions: readonly Action[]): void {
	const granted = actions.find((action) => can(actor, action));
	if (granted === undefined) requirePermission(actor, actions[0]!);
}

/** The client organisation a client acts for; consultants have none, and may not call this. */
export function requireClientId(actor: Actor): string {
	if (actor.role !== 'client' || actor.clientId === null)
		throw new AppError('forbidden', 'This page belongs to the customer portal.');
	return actor.clientId;
}
