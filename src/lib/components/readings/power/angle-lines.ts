import { angleBudget } from '$lib/uncertainty/angle-budget';
import type { MeasuringChain } from '$lib/uncertainty/measuring-chain';
import { SOURCE_WORDS } from '$lib/uncertainty/source-words';
import { formatNumber } from '$lib/units/format';

/** Orders at which the budget of the angle is shown. */
const SHOWN_ORDERS = [1, 5, 13, 25, 49];

export interface AngleLine {
	name: string;
	note: string;
	/** Half-width of the bound at each of the orders shown, degrees. */
	figures: string[];
}

export interface AngleTable {
	orders: number[];
	lines: AngleLine[];
	/** U with k = 2 at each of the orders. */
	expanded: string[];
}

function degrees(value: number | undefined | null): string {
	return value == null ? 'not known' : formatNumber(value, { decimals: value < 10 ? 2 : 1 });
}

/** What the angle between voltage and current is uncertain by, source by source, at some orders. */
export function angleTable(chain: MeasuringChain, load_A: number | null, highestOrder: number): AngleTable {
	const orders = SHOWN_ORDERS.filter((order) => order <= highestOrder);
	const budgets = orders.map((order) => angleBudget(chain, order, load_A));
	const sources = new Set(
		budgets.flatMap(({ contributions, notKnown }) => [
			...contributions.map(({ source }) => source),
			...notKnown
		])
	);
	return {
		orders,
		lines: [...sources].map((source) => ({
			...SOURCE_WORDS[source],
			figures: budgets.map(({ contributions }) =>
				degrees(contributions.find((one) => one.source === source)?.stated)
			)
		})),
		expanded: budgets.map(({ U }) => degrees(U))
	};
}
