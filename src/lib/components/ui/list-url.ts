/** Lists keep their page, order and filters in the address. These build the addresses of links within a list. */

/** The same list with one parameter changed (null removes it) and, unless paging itself, back on its first page. */
export function withParameter(url: URL, name: string, value: string | null, keepPage = false): string {
	const parameters = new URLSearchParams(url.searchParams);
	if (value === null || value === '') parameters.delete(name);
	else parameters.set(name, value);
	if (!keepPage && name !== 'page') parameters.delete('page');
	const query = parameters.toString();
	return query ? `${url.pathname}?${query}` : url.pathname;
}

export type SortDirection = 'ascending' | 'descending';

/** `sort=name` ascends, `sort=-name` descends; null when the list is not sorted by `key`. */
export function sortDirection(url: URL, key: string, initial?: string): SortDirection | null {
	const sort = url.searchParams.get('sort') ?? initial ?? '';
	if (sort === key) return 'ascending';
	return sort === `-${key}` ? 'descending' : null;
}

/** Address that sorts by `key`; a second use turns the order round. */
export function sortHref(url: URL, key: string, initial?: string): string {
	return withParameter(url, 'sort', sortDirection(url, key, initial) === 'ascending' ? `-${key}` : key);
}
