/**
 * Where to go after signing in. Only a path of our own is accepted: an address from the query string could
 * otherwise send a person, freshly signed in, to somebody else's copy of this page.
 */
export function ownPath(candidate: string | null | undefined, fallback: string): string {
	if (!candidate || !candidate.startsWith('/') || candidate.startsWith('//')) return fallback;
	const base = 'http://own.invalid';
	const url = URL.canParse(candidate, base) ? new URL(candidate, base) : null;
	if (!url || url.origin !== base || url.pathname.startsWith('//')) return fallback;
	return url.pathname + url.search;
}
