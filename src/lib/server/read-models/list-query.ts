/** What a list was asked for: words, order and page, all from the address. */
export interface ListQuery<Sort extends string = string> {
	q: string;
	sort: Sort;
	descending: boolean;
	page: number;
	pageSize: number;
}

/** One page of a list and how many rows there are in all. */
export interface ListPage<Row> {
	rows: Row[];
	total: number;
	page: number;
	pageSize: number;
}

export const PAGE_SIZE = 25;
const LONGEST_SEARCH = 100;
const LAST_PAGE = 100_000;

/**
 * Reads `q`, `sort` ("name" or "-name") and `page` from an address. Whatever is not understood falls back to the
 * list's own order and its first page: an old link must still open.
 */
export function parseListQuery<Sort extends string>(
	parameters: URLSearchParams,
	sorts: readonly Sort[],
	initial: `-${Sort}` | Sort
): ListQuery<Sort> {
	const asked = parameters.get('sort') ?? initial;
	const known = sorts.find((sort) => sort === asked || `-${sort}` === asked);
	const effective: string = known === undefined ? initial : asked;
	const descending = effective.startsWith('-');
	const page = Number(parameters.get('page') ?? '1');
	return {
		q: (parameters.get('q') ?? '').trim().slice(0, LONGEST_SEARCH),
		sort: known ?? (initial.replace(/^-/, '') as Sort),
		descending,
		page: Number.isInteger(page) && page >= 1 && page <= LAST_PAGE ? page : 1,
		pageSize: PAGE_SIZE
	};
}

/** Pattern that finds the words as typed anywhere; to be used with `like ? escape '\'`. */
export function likePattern(q: string): string {
	return `%${q.replace(/[\\%_]/g, (sign) => `\\${sign}`)}%`;
}
