import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import {
	familyContent,
	harmonicContent,
	partialOddCurrent,
	pwhd_pctOfFundamental,
	tdd_pctOfDemandCurrent,
	thd_pctOfFundamental,
	thd_pctOfRms
} from '$lib/harmonics/distortion';
import { ORDER_STRIDE } from '$lib/harmonics/intervals';
import {
	eddyLossFactor,
	kFactor,
	kRatingFor,
	loadFactorK,
	permissibleCurrent_pu,
	strayLossFactor
} from '$lib/harmonics/losses/loss-factors';
import { neutralLoading } from '$lib/harmonics/losses/neutral-loading';
import { smoothWindows } from '$lib/harmonics/smoothing';
import {
	telephoneInfluenceFactor,
	telephoneProduct,
	telephoneWeight
} from '$lib/harmonics/telephone/telephone-influence';

/** Examples with their sources and status words; "from memory" means that the named text was not seen. */
interface Example {
	id: string;
	source: string;
	inputs: Record<string, unknown>;
	expected: Record<string, number>;
	recomputed_full_precision: Record<string, number>;
	tolerance: number | Record<string, number>;
}
const examples: Example[] = JSON.parse(
	readFileSync(new URL('./worked-examples.json', import.meta.url), 'utf8')
);
const example = (id: string): Example => {
	const found = examples.find((one) => one.id === id);
	if (!found) throw new Error(`no example ${id}`);
	return found;
};

/** A row with zeros for the orders that the example leaves out: it says that they are not there. */
function rowOf(byOrder: unknown, factor = 1): Float64Array {
	const row = new Float64Array(ORDER_STRIDE);
	for (const [order, value] of Object.entries(byOrder as Record<string, number>))
		row[Number(order)] = factor * value;
	return row;
}

/** Within the digits of the full-precision figure, and within the published one's own tolerance. */
function expectFigure(one: Example, key: string, actual: number): void {
	const full = one.recomputed_full_precision[key]!;
	expect(Math.abs(actual / full - 1), `${one.id} ${key}`).toBeLessThan(2e-9);
	const published = one.expected[key];
	if (published === undefined) return;
	const tolerance = typeof one.tolerance === 'number' ? one.tolerance : one.tolerance[key]!;
	expect(Math.abs(actual - published), `${one.id} ${key} as published`).toBeLessThanOrEqual(tolerance);
}

describe('loss factors', () => {
	it('of the example spectrum of IEEE Std C57.110, with the permissible current of a dry-type transformer', () => {
		const one = example('ex-c57110-FHL');
		const row = rowOf(one.inputs['I_h_pu']);
		expectFigure(one, 'F_HL', eddyLossFactor(row, 50));
		expectFigure(one, 'F_HL_STR', strayLossFactor(row, 50));
		expectFigure(one, 'K_factor_if_rated_rms_is_1pu', kFactor(row, 1, 50));
		const derated = example('ex-c57110-derating-dry');
		expectFigure(derated, 'I_max_pu', permissibleCurrent_pu(eddyLossFactor(row, 50), 0.15));
		expectFigure(
			example('ex-c57110-FHL-normalised-to-I1'),
			'F_HL',
			eddyLossFactor(rowOf(example('ex-c57110-FHL-normalised-to-I1').inputs['I_h_over_I1']), 50)
		);
	});

	it('of six-pulse currents: distortion, loss factor, and the K of EN 50541, which is another number', () => {
		const one = example('ex-six-pulse-typical');
		const row = rowOf({ '1': 100, ...(one.inputs['percent'] as object) });
		expectFigure(one, 'thd_percent', thd_pctOfFundamental(row, 102.3, 50));
		expectFigure(one, 'F_HL', eddyLossFactor(row, 50));
		expectFigure(one, 'K_sum_h2_over_I1sq', kFactor(row, 100, 50));
		const european = example('ex-en50541-factorK');
		const spectrum = rowOf(european.inputs['percent']);
		expectFigure(european, 'K_q1.5', loadFactorK(spectrum, 0.1, 1.5, 50));
		expectFigure(european, 'K_q1.7', loadFactorK(spectrum, 0.1, 1.7, 50));
	});

	it('grow by one with each order of a 1/h spectrum, so that the highest order has to be stated', () => {
		const row = Float64Array.from({ length: ORDER_STRIDE }, (_, order) => (order > 0 ? 1 / order : 0));
		for (const top of [7, 25, 50]) expect(kFactor(row, 1, top)).toBeCloseTo(top, 12);
	});

	it('do not depend on the size of the current, where K does; no data give no figure', () => {
		const row = rowOf(example('ex-c57110-FHL').inputs['I_h_pu']);
		const tripled = row.map((v) => 3 * v);
		expect(eddyLossFactor(tripled, 50)).toBeCloseTo(eddyLossFactor(row, 50), 12);
		expect(kFactor(tripled, 1, 50)).toBeCloseTo(9 * kFactor(row, 1, 50), 10);
		row[23] = NaN;
		expect(eddyLossFactor(row, 50)).toBeNaN();
		expect(eddyLossFactor(row, 19)).not.toBeNaN();
	});

	it('of the theoretical six-pulse current (IEEE Std 519-1992): every order it has adds one to K', () => {
		const one = example('ex-six-pulse-theoretical');
		const row = rowOf({ '1': 100, ...one.recomputed_full_precision });
		for (const [order, printed_pct] of Object.entries(one.expected))
			expect(Math.abs(row[Number(order)]! - printed_pct), `order ${order}`).toBeLessThan(
				one.tolerance as number
			);
		// 4/(nπ)·cos(nπ/6) over that of n = 1: the six-pulse block of 120° has 100/h percent by its Fourier integral.
		expect(Math.abs(kFactor(row, 100, 25) / 9 - 1)).toBeLessThan(1e-8);
		expect(Math.abs(kFactor(row, 100, 13) / 5 - 1)).toBeLessThan(1e-8);
	});

	it('lead to the next marked rating (UL 1561, ratings from secondary pages)', () => {
		expect([1, 1.01, 4, 9.2, 50, 50.1].map(kRatingFor)).toEqual([1, 4, 4, 13, 50, null]);
	});
});

describe('distortion of published currents', () => {
	it('one numerator, three denominators: THD, THD on the rms, TDD (PCIC 2003 table)', () => {
		for (let i = 1; i <= 7; i++) {
			const one = example(`ex-thd-vs-tdd-${i}`);
			const { I1_A, I_harm_A, I_L_A } = one.inputs as Record<string, number>;
			const row = rowOf({ 1: I1_A!, 5: I_harm_A! });
			expectFigure(one, 'thd_percent', thd_pctOfFundamental(row, I1_A!, 50));
			expectFigure(one, 'tdd_percent', tdd_pctOfDemandCurrent(row, I_L_A!, 50));
			expectFigure(one, 'I_rms_A', Math.hypot(I1_A!, I_harm_A!));
		}
	});

	it.each(['ex-distortion-factor-thd10', 'ex-distortion-factor-thd20', 'ex-distortion-factor-thd33'])(
		'%s (Erickson & Maksimovic, 20.1): the share of the fundamental in the rms follows from the THD on it',
		(id) => {
			const one = example(id);
			const onRms = thd_pctOfRms(one.inputs['thd_percent'] as number) / 100;
			expectFigure(one, 'distortion_factor_percent', 100 * Math.sqrt(1 - onRms ** 2));
		}
	);

	it('of a peak rectifier (Erickson & Maksimovic, fig. 20.7), with its loss factor and neutral current', () => {
		const one = example('ex-peak-rectifier-thd');
		const row = rowOf(one.inputs['percent_of_fundamental']);
		const thd = thd_pctOfFundamental(row, 168, 50);
		expectFigure(one, 'thd_percent', thd);
		expectFigure(one, 'distortion_factor_percent', 100 * Math.sqrt(1 - (thd_pctOfRms(thd) / 100) ** 2));
		expectFigure(one, 'harmonic_loss_factor_F_HL', eddyLossFactor(row, 50));
		const rms = Math.sqrt(row.reduce((sum, v) => sum + v * v, 0));
		expectFigure(
			one,
			'neutral_to_phase_rms_ratio_balanced_4wire',
			(3 * familyContent(row, 'triplen', 50)) / rms
		);
		expect(familyContent(row, 'even', 50)).toBe(0);
		expect(familyContent(row, 'odd', 50)).toBeCloseTo(thd, 10);
	});

	it('weighted by the order, not by its square', () => {
		const one = example('ex-pwhd');
		const row = rowOf({ '1': 100, ...(one.inputs['percent'] as object) });
		expectFigure(one, 'PWHD_percent', pwhd_pctOfFundamental(row));
		expectFigure(one, 'THD_percent_same_orders', (100 * harmonicContent(row, 14, 40)) / row[1]!);
		row[13] = 50;
		row[41] = 50;
		expectFigure(one, 'PWHD_percent', pwhd_pctOfFundamental(row));
	});

	it('of odd orders 21 to 39 alone, where they stand by themselves', () => {
		const row = rowOf({ 1: 100, 19: 9, 20: 9, 21: 3, 22: 9, 39: 4, 40: 9, 41: 9 });
		expect(partialOddCurrent(row)).toBe(5);
		row[38] = NaN;
		expect(partialOddCurrent(row)).toBe(5);
		row[37] = NaN;
		expect(partialOddCurrent(row)).toBeNaN();
	});
});

describe('telephone influence', () => {
	it('of a distorted voltage (weights of 1960)', () => {
		const one = example('ex-tif-voltage');
		const row = rowOf(one.inputs['V_pu']);
		expectFigure(one, 'TIF', telephoneInfluenceFactor(row, 60, 50));
		expectFigure(one, 'VT_pu', telephoneProduct(row, 60, 50));
	});

	it('gives the orders of 50 Hz mains the weights of their frequencies, and no figure for a missing order', () => {
		const row = rowOf({ 1: 1, 50: 0.01 });
		expect(telephoneProduct(row, 50, 50)).toBeCloseTo(
			Math.hypot(0.5 * (50 / 60), 0.01 * telephoneWeight(2500)),
			12
		);
		// Between orders 41 and 43 of 60 Hz: P falls from 10340/12300 to 10600/12900 over 120 Hz.
		const share = (2500 - 2460) / 120;
		const P = (10340 / 12300) * (1 - share) + (10600 / 12900) * share;
		expect(telephoneWeight(2500)).toBeCloseTo(5 * P * 2500, 8);
		row[7] = NaN;
		expect(telephoneProduct(row, 50, 50)).toBeNaN();
		expect(telephoneInfluenceFactor(row, 50, 5)).not.toBeNaN();
	});

	it('interpolates the weight of a frequency between those of its neighbours, and knows none beyond 3 kHz', () => {
		expect(telephoneWeight(1020)).toBeCloseTo(5100, 9);
		// Order 2 at 60 Hz is not in the table: halfway between 60 and 180 Hz in P, that is W = 5·P·f.
		const P = (0.5 / 300 + 30 / 900) / 2;
		expect(telephoneWeight(120)).toBeCloseTo(5 * P * 120, 9);
		expect(telephoneWeight(50)).toBeCloseTo((0.5 * 50) / 60, 9);
		expect(telephoneWeight(3060)).toBeNaN();
	});
});

describe('cables whose neutral carries triplen current (IEC 60364-5-52, annex E)', () => {
	it.each(['ex-cable-39A-20pct', 'ex-cable-39A-40pct', 'ex-cable-39A-50pct', 'ex-cable-25A-32pct'])(
		'%s',
		(id) => {
			const one = example(id);
			const { I_B, third_harmonic_percent } = one.inputs as Record<string, number>;
			const loading = neutralLoading(I_B!, third_harmonic_percent!)!;
			expectFigure(one, 'design_current_A', loading.designCurrent_A);
			if (one.expected['neutral_A'] !== undefined) expectFigure(one, 'neutral_A', loading.neutralCurrent_A);
		}
	);

	it('counts the neutral where it governs: 44 % of 25 A asks for 38.4 A', () => {
		// A public page on table 4Aa (pangonilo.com, 2015) prints 29.0 A here. It divides the line current by 0.86, although
		// the rule it quotes takes the neutral current, 3·0.44·25 A = 33 A, between 33 and 45 %. Its figure is left out.
		const loading = neutralLoading(25, 44)!;
		expect(loading.neutralCurrent_A).toBeCloseTo(33, 12);
		expect(loading.designCurrent_A).toBeCloseTo(33 / 0.86, 12);
	});

	it('counts a bound to the band below it, as BS 7671 prints', () => {
		const bands = [15, 15.01, 33, 33.01, 45, 45.01].map((third) => {
			const { governs, reductionFactor } = neutralLoading(100, third)!;
			return `${governs} ${reductionFactor}`;
		});
		expect(bands).toEqual(['line 1', 'line 0.86', 'line 0.86', 'neutral 0.86', 'neutral 0.86', 'neutral 1']);
		expect(neutralLoading(100, NaN)).toBeNull();
	});
});

describe('smoothing of 1.5 s (IEC 61000-4-7, 5.5.1, coefficients from memory)', () => {
	it('has the printed coefficients within their rounding, and starts with the first value', () => {
		const stepped = smoothWindows(Float64Array.of(0, 1, 1), 0.2);
		expect(stepped[0]).toBe(0);
		expect(Math.abs(1 / stepped[1]! - 8.012)).toBeLessThan(0.002);
		expect(Math.abs(stepped[2]! - (1 + 7.012 * stepped[1]!) / 8.012)).toBeLessThan(1e-4);
		const gap = smoothWindows(Float64Array.of(2, NaN, 5, 5), 0.2);
		expect([...gap]).toEqual([2, NaN, 5, 5]);
		const after = (window_s: number) => 1 / smoothWindows(Float64Array.of(0, 1), window_s)[1]!;
		expect(Math.abs(after(0.32) - 5.206)).toBeLessThan(0.002);
		expect(Math.abs(after(16 / 60) - 6.14)).toBeLessThan(0.002);
	});
});
