import { angleBudget } from '../../src/lib/uncertainty/angle-budget';
import { coverageOf, factorFor95, combine } from '../../src/lib/uncertainty/budget';
import { bounded, certified, observed } from '../../src/lib/uncertainty/contribution';
import { figureBudget, type Figure } from '../../src/lib/uncertainty/figure-budget';
import type { MeasuringChain, Quantity } from '../../src/lib/uncertainty/measuring-chain';
import { chainOf, type ChainFacts } from '../../src/lib/uncertainty/survey-chain';
import type { OrderCoverage } from './coverage-simulation';
import { CERTIFIED_CHAIN } from './simulated-chains';

const ORDERS = [1, 3, 5, 7, 11, 13, 17, 20, 21, 25, 31, 37, 43, 49];

function markdown(head: readonly string[], rows: readonly (readonly string[])[]): string {
	const line = (cells: readonly string[]) => `| ${cells.join(' | ')} |`;
	return [line(head), line(head.map((_, i) => (i === 0 ? '---' : '---:'))), ...rows.map(line)].join('\n');
}

function chain(facts: Partial<ChainFacts>): MeasuringChain {
	return chainOf({
		nominalFrequency_Hz: 50,
		instrumentClass: 'I',
		voltageSensorError_pct: null,
		currentSensorError_pct: null,
		voltageTransformerPrimary_V: null,
		currentTransformerPrimary_A: null,
		...facts
	});
}

const TRANSFORMER = chain({ currentTransformerPrimary_A: 1000, currentTransformerClass: 0.5 });
const COLUMNS: { head: string; chain: MeasuringChain; quantity: Quantity; load_A: number | null }[] = [
	{ head: 'class I, direct', chain: chain({}), quantity: 'voltage', load_A: null },
	{ head: 'class I, CT 0.5 at rated load', chain: TRANSFORMER, quantity: 'current', load_A: 1000 },
	{ head: 'class I, CT 0.5 at 5 % load', chain: TRANSFORMER, quantity: 'current', load_A: 50 },
	{ head: 'certificate, flexible coil 0.5 %', chain: CERTIFIED_CHAIN, quantity: 'current', load_A: null },
	{
		head: 'class I, inductive VT 0.5, 50 Hz',
		chain: chain({ voltageTransformerPrimary_V: 11_000, voltageTransformerClass: 0.5 }),
		quantity: 'voltage',
		load_A: null
	}
];

function figure(quantity: Quantity, order: number, value_pct: number, load_A: number | null): Figure {
	return {
		quantity,
		orders: { from: order, to: order },
		value_pct,
		basis: 'agreed',
		evidence: { fullScale: null, load_A, spread: null, composition_pct: null }
	};
}

/** U in percent of reading, of orders at 4 % of the basis. */
export function uncertaintyTable(): string {
	return markdown(
		['order', ...COLUMNS.map((column) => column.head)],
		ORDERS.map((order) => [
			String(order),
			...COLUMNS.map((column) => {
				const { U } = figureBudget(column.chain, figure(column.quantity, order, 4, column.load_A));
				return U === null ? 'not known' : ((100 * U) / 4).toFixed(2);
			})
		])
	);
}

const ANGLE_COLUMNS: { head: string; chain: MeasuringChain; load_A: number | null }[] = [
	{ head: 'class I, direct', chain: chain({}), load_A: null },
	{ head: 'class I, coil 0.5 %', chain: chain({ currentSensorError_pct: 0.5 }), load_A: null },
	{ head: 'class I, CT 0.5 at rated load', chain: TRANSFORMER, load_A: 1000 },
	{ head: 'class I, CT 0.5 at 5 % load', chain: TRANSFORMER, load_A: 50 },
	{
		head: 'class I, CT 0.5 at rated load, inductive VT 0.5, 50 Hz',
		chain: chain({
			currentTransformerPrimary_A: 1000,
			currentTransformerClass: 0.5,
			voltageTransformerPrimary_V: 11_000,
			voltageTransformerClass: 0.5
		}),
		load_A: 1000
	}
];

/** U of the angle between voltage and current, degrees. */
export function angleTable(): string {
	return markdown(
		['order', ...ANGLE_COLUMNS.map((column) => column.head)],
		ORDERS.map((order) => [
			String(order),
			...ANGLE_COLUMNS.map(
				(column) => angleBudget(column.chain, order, column.load_A).U?.toFixed(1) ?? 'not known'
			)
		])
	);
}

const input = (stated: number) =>
	({ source: 'sensor-ratio', stated, statedIn: 'unit of the figure', sensitivity: 1 }) as const;
/** Contributions by their standard uncertainty. */
const normal = (u: number) => certified(input(2 * u), 2);
const rectangle = (u: number) => bounded(input(u * Math.sqrt(3)));
const readings = (u: number, degreesOfFreedom: number) => observed(input(u), degreesOfFreedom);

const SHARES: [string, ReturnType<typeof normal>[]][] = [
	...[0, 0.25, 0.5, 0.7, 0.8, 0.9, 1].map((share): [string, ReturnType<typeof normal>[]] => [
		`one bound with ${100 * share} % of the variance, the rest normal`,
		[normal(Math.sqrt(1 - share)), rectangle(Math.sqrt(share))]
	]),
	['two equal bounds', [rectangle(1), rectangle(1)]],
	['three equal bounds', [rectangle(1), rectangle(1), rectangle(1)]],
	['half the variance from 3 windows, half normal', [readings(1, 2), normal(1)]],
	['half the variance from 11 windows, half normal', [readings(1, 10), normal(1)]]
];

/** What ±2u holds, by what the budget is made of. */
export function coverageTable(): string {
	return markdown(
		['budget', 'inside ±2u, %', 'k for 95 %', 'effective degrees of freedom'],
		SHARES.map(([words, contributions]) => {
			const budget = combine(contributions);
			const freedom = budget.effectiveDegreesOfFreedom;
			return [
				words,
				(100 * coverageOf(budget)).toFixed(1),
				factorFor95(budget).toFixed(2),
				Number.isFinite(freedom) ? String(Math.floor(freedom)) : 'unlimited'
			];
		})
	);
}

/** Outcome of the simulations, per order. */
export function simulationTable(
	certificated: readonly OrderCoverage[],
	classed: readonly OrderCoverage[]
): string {
	const pct = (share: number) => (100 * share).toFixed(1);
	return markdown(
		[
			'order',
			'certificate: U, % of level',
			'inside ±U, %',
			'promised, %',
			'class limit: U, % of level',
			'inside ±U, %',
			'promised, %'
		],
		certificated.map((one, i) => {
			const other = classed[i]!;
			return [
				String(one.order),
				one.U_pctOfLevel.toFixed(2),
				pct(one.inside),
				pct(one.promised),
				other.U_pctOfLevel.toFixed(2),
				pct(other.inside),
				pct(other.promised)
			];
		})
	);
}

/** Puts tables between their markers. */
export function withTables(text: string, tables: Record<string, string>): string {
	return Object.entries(tables).reduce((whole, [name, table]) => {
		const marked = new RegExp(`(<!-- ${name} -->\\n)[\\s\\S]*?(<!-- end of ${name} -->)`);
		if (!marked.test(whole)) throw new Error(`no place for the table “${name}”`);
		return whole.replace(marked, (_, head: string, foot: string) => `${head}\n${table}\n\n${foot}`);
	}, text);
}
