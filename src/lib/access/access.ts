/**
 * Who may do what. The one place where roles meet actions; pages, form actions, API routes and files all ask here.
 */
export const ROLES = ['owner', 'engineer', 'checker', 'client'] as const;
export type Role = (typeof ROLES)[number];

/** The person acting, in one practice, in one role. A client acts for one client organisation. */
export interface Actor {
	userId: string;
	name: string;
	email: string;
	practiceId: string;
	practiceName: string;
	membershipId: string;
	role: Role;
	/** Set exactly when role is 'client'. */
	clientId: string | null;
}

export type Action =
	| 'practice.manage' // people, letterhead, retention, tokens, audit trail, outbox
	| 'register.read'
	| 'register.write' // clients, sites, points, instruments, surveys
	| 'capture.read'
	| 'capture.write'
	| 'assessment.read'
	| 'assessment.write'
	| 'report.read'
	| 'report.draft'
	| 'report.check' // return, issue, supersede, withdraw
	| 'limits.read'
	| 'portal.read' // issued reports of one's own organisation
	| 'portal.acknowledge'
	| 'portal.query'
	| 'portal.act'
	| 'account.manage'; // one's own name, password and devices

const CONSULTANT: readonly Action[] = [
	'account.manage',
	'register.read',
	'register.write',
	'capture.read',
	'capture.write',
	'assessment.read',
	'assessment.write',
	'report.read',
	'report.draft',
	'limits.read'
];

const GRANTS: Record<Role, ReadonlySet<Action>> = {
	owner: new Set<Action>([...CONSULTANT, 'report.check', 'practice.manage']),
	checker: new Set<Action>([...CONSULTANT, 'report.check']),
	engineer: new Set<Action>(CONSULTANT),
	client: new Set<Action>([
		'account.manage',
		'portal.read',
		'portal.acknowledge',
		'portal.query',
		'portal.act'
	])
};

export function can(actor: Pick<Actor, 'role'>, action: Action): boolean {
	return GRANTS[actor.role].has(action);
}
