/** Where `g` and a letter lead, in the engineer's half. The list under `?` is made from it. */
export interface Shortcut {
	keys: readonly string[];
	does: string;
	href?: string;
}

export const APP_SHORTCUTS: readonly Shortcut[] = [
	{ keys: ['g', 'd'], does: 'Desk', href: '/desk' },
	{ keys: ['g', 's'], does: 'Surveys', href: '/surveys' },
	{ keys: ['g', 'c'], does: 'Clients', href: '/clients' },
	{ keys: ['g', 'l'], does: 'Limit library', href: '/limit-library' },
	{ keys: ['g', 'i'], does: 'Instruments', href: '/instruments' },
	{ keys: ['/'], does: 'Search' },
	{ keys: ['?'], does: 'This list' }
];

/** Keys typed into a field, or with a modifier, are the field's and the browser's own. */
export function isForShortcut(event: KeyboardEvent): boolean {
	if (event.ctrlKey || event.metaKey || event.altKey || event.defaultPrevented) return false;
	const target = event.target;
	if (!(target instanceof HTMLElement)) return true;
	return !target.isContentEditable && !['INPUT', 'TEXTAREA', 'SELECT'].includes(target.tagName);
}
