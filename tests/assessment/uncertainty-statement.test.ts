import { describe, expect, it } from 'vitest';
import { assess } from '$lib/assessment/assess';
import type { Assessment } from '$lib/assessment/assessment';
import { figureOfRow } from '$lib/assessment/figure-evidence';
import { chainUncertainty } from '$lib/assessment/uncertainty-statement';
import { budgetLines, budgetOfLine, budgetSentence } from '$lib/components/verdict/budget-lines';
import type { VerdictLineView } from '$lib/components/verdict/verdict-line';
import type { MeasuringChain } from '$lib/uncertainty/measuring-chain';
import { chainOf, type ChainFacts } from '$lib/uncertainty/survey-chain';
import { limitSet } from '../limits/load-limit-files';
import { makeSeries, POINT, spectrum, WEEK_10MIN } from './series-builder';

function chain(facts: Partial<ChainFacts> = {}): MeasuringChain {
	return chainOf({
		nominalFrequency_Hz: 60,
		instrumentClass: 'I',
		voltageSensorError_pct: null,
		currentSensorError_pct: 0.5,
		voltageTransformerPrimary_V: null,
		currentTransformerPrimary_A: 1600,
		...facts
	});
}

/** Voltages and currents of three phases; `count` ten-minute values, or so many 3-second ones. */
function judged(measuringChain: MeasuringChain, interval: '10min' | '3s', count: number): Assessment {
	const of = (quantity: 'voltage' | 'current', full: number, percents: Record<number, number>) =>
		(['L1', 'L2', 'L3'] as const).map((phase) => {
			const level = spectrum(full, percents);
			return makeSeries({
				...{ quantity, phase, interval, count },
				level: (order, i) => level(order) * (1 + 0.01 * (((i * 7) % 13) / 12))
			});
		});
	return assess({
		point: POINT,
		limitSet: limitSet('ieee-519-2022'),
		series: [
			...of('voltage', 480 / Math.sqrt(3), { 5: 2, 7: 1, 25: 0.1 }),
			...of('current', 1000, { 5: 6, 7: 2, 23: 0.4 })
		],
		siteTimeZone: 'UTC',
		uncertainty: chainUncertainty(measuringChain),
		decisionRule: 'guarded'
	});
}

const line = (row: Assessment['rows'][number]): VerdictLineView => ({
	...row,
	statistic: '',
	multiplier: 1,
	limitRow: null
});

describe('what is printed of the measuring chain', () => {
	it('names class, transducers, assumptions and what ±U holds', () => {
		const { text, voltage_pctOfReading, current_pctOfReading } = chainUncertainty(chain());
		expect(text).toContain('class I after IEC 61000-4-7:2002+A1:2008, table 1 (values from memory)');
		expect(text).toContain('voltage measured directly');
		expect(text).toContain('current transformers of 1 % (not stated, assumed)');
		expect(text).toMatch(/±U holds about 99\.\d % of the true values/);
		expect(voltage_pctOfReading(5)).toBeCloseTo(10 / Math.sqrt(3), 12);
		expect(current_pctOfReading(49)).toBeGreaterThan(current_pctOfReading(1)!);
	});

	it('says of a certificate that it is one, and nothing of a dominating bound', () => {
		const certificate = (['voltage', 'current'] as const).map((quantity) => ({
			...{ quantity, fromOrder: 1, toOrder: 50, expanded_pctOfReading: 2, coverageFactor: 2 }
		}));
		const { text } = chainUncertainty(chain({ certificate }));
		expect(text).toContain('calibration certificate');
		expect(text).not.toContain('dominates');
	});

	it('says where a voltage transformer is not known', () => {
		const { text, voltage_pctOfReading } = chainUncertainty(chain({ voltageTransformerPrimary_V: 13_800 }));
		expect(text).toContain('Above the 16th order');
		expect(voltage_pctOfReading(16)).not.toBeNull();
		expect(voltage_pctOfReading(17)).toBeNull();
	});
});

describe('the budget of a verdict row', () => {
	it.each([
		['10min', WEEK_10MIN],
		['10min', 500],
		['3s', 40]
	] as const)('is made again from what the row keeps, stored and read: %s, %d values', (interval, count) => {
		const rows = judged(chain(), interval, count).rows.filter((row) => row.value_pct !== null);
		expect(rows.length).toBeGreaterThan(100);
		for (const row of JSON.parse(JSON.stringify(rows)) as typeof rows) {
			const budget = budgetOfLine(line(row), chain());
			expect(budget?.U).toBeCloseTo(row.uncertainty_pct!, 12);
		}
	});

	it('holds spread of a part of a week and of a snapshot, none of a whole week', () => {
		const sources = (interval: '10min' | '3s', count: number) => {
			const row = judged(chain(), interval, count).rows.find(
				(one) => one.quantity === 'current' && one.item.kind === 'order' && one.item.order === 5 && one.figure
			);
			return budgetOfLine(line(row!), chain())!.contributions.map((one) => one.source);
		};
		expect(sources('10min', 1008)).not.toContain('missing-intervals');
		expect(sources('10min', 500)).toContain('missing-intervals');
		expect(sources('3s', 40)).toContain('window-noise');
	});

	it('counts the load of the current transformer and the spectrum of a total', () => {
		const total = judged(chain(), '10min', WEEK_10MIN).rows.find(
			(row) => row.item.kind === 'total' && row.quantity === 'current' && row.figure
		)!;
		expect(total.figure?.load_A).toBeGreaterThan(1000);
		expect(total.figure?.composition_pct).toHaveLength(49);
		expect(Math.hypot(...total.figure!.composition_pct!)).toBeCloseTo(total.value_pct!, 3);
		expect(figureOfRow(total)?.basis).toBe('agreed');
	});

	it('is shown line by line, and told in a sentence', () => {
		const row = judged(chain(), '3s', 40).rows.find((one) => one.quantity === 'current' && one.figure)!;
		const budget = budgetOfLine(line(row), chain())!;
		const lines = budgetLines(budget);
		expect(lines[0]?.name).toBe('Recorder, class limit');
		expect(lines.map((one) => one.name)).toContain('Instrument transformer, higher orders');
		expect(budgetSentence(budget)).toMatch(/^U = k·u = 2 · .* ±U holds .* of the true values/);
	});

	it('is not shown when today’s code would count another', () => {
		const row = judged(chain(), '3s', 40).rows.find((one) => one.figure)!;
		expect(
			budgetOfLine(
				line(row),
				chain({ instrumentClass: 'II', currentSensorError_pct: 3, voltageSensorError_pct: 3 })
			)
		).toBeNull();
		expect(budgetOfLine(line(row), null)).toBeNull();
		expect(budgetOfLine(line({ ...row, figure: undefined }), chain())).toBeNull();
	});
});

describe('a value whose uncertainty is not known', () => {
	const facts = chain({ voltageTransformerPrimary_V: 13_800 });
	const assessment = judged(facts, '10min', WEEK_10MIN);
	const at = (order: number) =>
		assessment.rows.find(
			(row) =>
				row.quantity === 'voltage' && row.figure && row.item.kind === 'order' && row.item.order === order
		)!;

	it('is judged by the known part, and the row and the notes say so', () => {
		expect(at(25).uncertainty_pct).toBeNull();
		expect(at(25).verdict).toBe('compliant');
		expect(at(25).reason).toContain('not known');
		expect(at(5).uncertainty_pct).toBeGreaterThan(0);
		expect(at(5).reason).not.toContain('not known');
		expect(assessment.notes?.join(' ')).toContain('from the 17th order on');
		expect(budgetSentence(budgetOfLine(line(at(25)), facts)!)).toMatch(/^No expanded uncertainty/);
	});

	it('leaves the total known, which lies below', () => {
		const total = assessment.rows.find(
			(row) => row.quantity === 'voltage' && row.figure && row.item.kind === 'total'
		)!;
		expect(total.uncertainty_pct).toBeGreaterThan(0);
	});
});
