import type { Role } from '$lib/access/access';

/** Areas of the engineer's half that a role sees; the practice's own area is the owner's. */
export function appAreas(role: Role): { href: string; label: string }[] {
	return [
		{ href: '/desk', label: 'Desk' },
		{ href: '/surveys', label: 'Surveys' },
		{ href: '/clients', label: 'Clients' },
		{ href: '/limit-library', label: 'Limit library' },
		{ href: '/instruments', label: 'Instruments' },
		...(role === 'owner' ? [{ href: '/practice', label: 'Practice' }] : [])
	];
}
