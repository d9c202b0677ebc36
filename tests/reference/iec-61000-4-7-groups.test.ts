import { describe, expect, it } from 'vitest';
import { joinLines, type GroupRows } from '$lib/harmonics/line-groups';
import { ORDER_STRIDE } from '$lib/harmonics/intervals';
import { executeRealDft, planRealDft } from '$lib/numerics/dft/real-dft';
import { readLineRms } from '$lib/numerics/dft/spectral-lines';

// Grouping of IEC 61000-4-7:2002+A1:2008 (3.2, 5.5, 5.6, annex A). The standard prints formulas, no figures for these
// signals: the figures were computed from the definition by an independent program (2048 points, 10 240 Hz).
// Tones are [Hz, rms, phase of a sine in degrees].
const POINTS = 2048;
const RATE_HZ = 10240;

function linesOf(tones: [number, number, number][]): Float64Array {
	const samples = Float64Array.from({ length: POINTS }, (_, n) =>
		tones.reduce(
			(sum, [frequency_Hz, rms, phase_deg]) =>
				sum +
				rms * Math.SQRT2 * Math.sin((2 * Math.PI * frequency_Hz * n) / RATE_HZ + (phase_deg * Math.PI) / 180),
			0
		)
	);
	const plan = planRealDft(POINTS);
	executeRealDft(plan, samples);
	const lines = new Float64Array(plan.lineCount);
	readLineRms(plan, lines, plan.lineCount);
	return lines;
}

function rowsOf(lines: Float64Array, cycles: 10 | 12): GroupRows {
	const row = () => new Float64Array(ORDER_STRIDE).fill(NaN);
	const rows = {
		components: row(),
		subgroups: row(),
		groups: row(),
		interharmonicSubgroups: row(),
		interharmonicGroups: row()
	};
	const squares = lines.map((line) => line * line);
	joinLines(squares, cycles, 50, true, rows, 0);
	return rows;
}

interface Figures {
	component: number;
	subgroup: number;
	group: number;
	interharmonicGroup: number;
	centredSubgroup: number;
}

function expectFigures(lines: Float64Array, order: number, cycles: 10 | 12, expected: Figures): void {
	const rows = rowsOf(lines, cycles);
	const close = (actual: number, figure: number) => expect(Math.abs(actual - figure)).toBeLessThan(1e-8);
	close(rows.components[order]!, expected.component);
	close(rows.subgroups[order]!, expected.subgroup);
	close(rows.groups[order]!, expected.group);
	close(rows.interharmonicGroups[order]!, expected.interharmonicGroup);
	close(rows.interharmonicSubgroups[order]!, expected.centredSubgroup);
}

describe('groups and subgroups of IEC 61000-4-7', () => {
	it('50 Hz, tones on lines: a line half way between orders gives half of its square to either group', () => {
		const lines = linesOf([
			[50, 230, 0],
			[250, 11.5, 0],
			[255, 4.6, 30],
			[275, 2.3, 60]
		]);
		expectFigures(lines, 5, 10, {
			component: 11.5,
			subgroup: 12.3858790564,
			group: 12.4921975649,
			interharmonicGroup: 5.14295634825,
			centredSubgroup: 2.3
		});
		expectFigures(lines, 6, 10, {
			component: 0,
			subgroup: 0,
			group: 1.62634559673,
			interharmonicGroup: 0,
			centredSubgroup: 0
		});
	});

	it('60 Hz: twelve cycles, half-weighted lines at ±6, eleven and nine lines between orders', () => {
		const lines = linesOf([
			[60, 120, 0],
			[300, 6, 0],
			[305, 2.4, 30],
			[330, 1.2, 60]
		]);
		expectFigures(lines, 5, 12, {
			component: 6,
			subgroup: 6.46219776856,
			group: 6.51766829472,
			interharmonicGroup: 2.683281573,
			centredSubgroup: 1.2
		});
		expectFigures(lines, 6, 12, {
			component: 0,
			subgroup: 0,
			group: 0.848528137424,
			interharmonicGroup: 0,
			centredSubgroup: 0
		});
	});

	it('mains signalling at 178 Hz beside the third harmonic (annex C, inputs from memory)', () => {
		const lines = linesOf([
			[50, 230, 0],
			[150, 11.5, 0],
			[178, 23, 0]
		]);
		expectFigures(lines, 3, 10, {
			component: 11.2228276317,
			subgroup: 11.3952506374,
			group: 15.2467954541,
			interharmonicGroup: 22.5056897084,
			centredSubgroup: 22.3619915075
		});
		expectFigures(lines, 4, 10, {
			component: 1.50301828004,
			subgroup: 2.75607412977,
			group: 20.2588858235,
			interharmonicGroup: 2.31088993749,
			centredSubgroup: 1.91596762926
		});
	});

	it('tiles the axis with subgroups and centred subgroups, and ends where the band does', () => {
		const squares = Float64Array.from({ length: 511 }, (_, k) => 1 + ((k * 7919) % 101));
		const rows = rowsOf(squares.map(Math.sqrt), 10);
		const sum = (values: Float64Array, from: number, to: number) =>
			values.slice(from, to + 1).reduce((total, value) => total + value * value, 0);
		const lines = squares.slice(2, 500).reduce((total, square) => total + square, 0);
		const tiled = sum(rows.subgroups, 1, 49) + sum(rows.interharmonicSubgroups, 0, 49) + squares[499]!;
		expect(Math.abs(tiled / lines - 1)).toBeLessThan(1e-12);
		const short = rowsOf(squares.map(Math.sqrt), 10);
		joinLines(squares, 10, 20, false, { ...short, groups: short.groups.fill(NaN) }, 0);
		expect(short.groups[19]).not.toBeNaN();
		expect(short.groups[20]).toBeNaN();
	});

	// What happens without synchronisation; a pure sine has to read zero distortion (leakage of the DFT, computed).
	it.each([
		[50.015, 229.962097692, 0.0557680871422, 0.0970106098888],
		[50.2, 228.948307656, 0.742229766826, 1.28914022693],
		[49.5, 227.135507191, 1.76009336476, 3.03138304067]
	])('a fixed window on %d Hz reads false distortion', (frequency_Hz, fundamental, thd_pct, thds_pct) => {
		const lines = linesOf([[frequency_Hz, 230, 0]]);
		const rows = rowsOf(lines, 10);
		let components = 0;
		let subgroups = 0;
		for (let order = 2; order <= 40; order++) {
			components += rows.components[order]! ** 2;
			subgroups += rows.subgroups[order]! ** 2;
		}
		expect(Math.abs(lines[10]! - fundamental)).toBeLessThan(1e-6);
		expect(Math.abs((100 * Math.sqrt(components)) / lines[10]! - thd_pct)).toBeLessThan(1e-8);
		const false_pct = (100 * Math.sqrt(subgroups)) / rows.subgroups[1]!;
		expect(Math.abs(false_pct - thds_pct)).toBeLessThan(1e-8);
	});
});
