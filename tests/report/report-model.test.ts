import { describe, expect, it } from 'vitest';
import { canonicalJson, measuredDataText } from '$lib/report/measured-data';
import { nextRevision } from '$lib/report/revision-status';
import { formatPeriod } from '$lib/report/dates';
import { suggestActions } from '$lib/report/suggest-actions';
import { suggestFindings } from '$lib/report/suggest-findings';
import { reportModel, reportSources } from './report-sources';

describe('the report model', () => {
	const model = reportModel();
	const current = model.tables.find((table) => table.quantity === 'current');

	it('survives JSON unchanged', () => {
		expect(JSON.parse(JSON.stringify(model))).toEqual(model);
	});

	it('holds every assessed row once, unrounded', () => {
		const { assessment } = reportSources();
		const cells = model.tables.flatMap((table) =>
			table.rules.flatMap((rule) => rule.rows.flatMap((row) => row.cells))
		);
		expect(cells.length).toBe(assessment.rows.length);
		expect(cells.map((cell) => cell.value_pct).sort()).toEqual(
			assessment.rows.map((row) => row.value_pct).sort()
		);
	});

	it('compares current with demand current: 7 % at the 5th and a TDD of 8 % for 20 < I_sc/I_L < 50', () => {
		// IEEE Std 519-2022, table 2.
		const rule = current?.rules.find((one) => one.rows.some((row) => row.verdict === 'exceeds'));
		expect(current?.basis).toBe('demand-current');
		expect(rule?.rows.find((row) => row.order === 5)?.limit_pct).toBe(7);
		expect(rule?.rows.find((row) => row.label === 'TDD')?.limit_pct).toBe(8);
	});

	it('names the worst phase and puts its chart first', () => {
		expect(model.verdict.worst?.phase).toBe('L3');
		expect(model.spectra[0]?.quantity).toBe('current');
		expect(model.verdict.overLimit).toEqual(['5th', 'TDD']);
	});

	it('lists each limit row used, with its provenance', () => {
		const keys = model.lineage.limitRows.map((row) => `${row.table}/${row.what}`);
		expect(new Set(keys).size).toBe(keys.length);
		for (const row of model.lineage.limitRows) expect(row.provenance).not.toBe('');
	});

	it('shows how I_L and I_sc came about', () => {
		// 2 MVA at 5.75 % behind 500 MVA: 1/(1/34.78 + 1/500) MVA = 32.52 MVA, 39.1 kA at 480 V (per-unit arithmetic).
		expect(model.point.shortCircuitCurrent_A).toBeCloseTo(39_116, -1);
		expect(model.point.demandWorking.length).toBeGreaterThan(1);
		expect(model.point.shortCircuitOrigin).toContain('transformer');
	});
});

describe('the data hash text', () => {
	it('stands still when only words change, and moves when a figure, a capture or the engine does', () => {
		const base = measuredDataText(reportModel());
		const words = reportModel({ document: { title: 'Another title', revision: 'B' } });
		expect(measuredDataText({ ...words, summary: 'Other words.', findings: [] })).toBe(base);
		expect(measuredDataText(reportModel({ currents: { 5: 9.3 } }))).not.toBe(base);
		expect(measuredDataText(reportModel({ decisionRule: 'simple' }))).not.toBe(base);
		const { lineage } = reportModel();
		expect(measuredDataText({ ...reportModel(), lineage: { ...lineage, engineVersion: '9' } })).not.toBe(
			base
		);
		const [first, ...rest] = lineage.captures;
		const other = { ...first!, files: [{ ...first!.files[0]!, sha256: '0'.repeat(64) }] };
		expect(
			measuredDataText({ ...reportModel(), lineage: { ...lineage, captures: [other, ...rest] } })
		).not.toBe(base);
	});

	it('does not depend on the order of keys', () => {
		expect(canonicalJson({ b: [1, { d: 1, c: null }], a: 'x' })).toBe('{"a":"x","b":[1,{"c":null,"d":1}]}');
	});
});

describe('suggestions', () => {
	const phase = (key: string) => key;

	it('for a six-pulse spectrum are reactors and a study, each preliminary', () => {
		const actions = suggestActions(reportSources().assessment);
		expect(actions.map((one) => one.key)).toEqual(
			expect.arrayContaining(['six-pulse-reactors', 'six-pulse-study'])
		);
		for (const one of actions.filter((a) => a.key.startsWith('six-pulse')))
			expect(one.detail).toMatch(/preliminary/);
	});

	it('for triplen currents ask for the neutral, not for reactors', () => {
		const keys = suggestActions(reportSources({ currents: { 3: 24, 5: 5, 9: 6 } }).assessment).map(
			(one) => one.key
		);
		expect(keys).toContain('triplen-neutral');
		expect(keys).not.toContain('six-pulse-reactors');
	});

	it('for an order that stands out ask for the capacitors, with their caution', () => {
		const found = suggestActions(reportSources({ currents: { 5: 2, 7: 1.4, 11: 6 } }).assessment).find(
			(one) => one.key === 'resonance-capacitors'
		);
		expect(found?.detail).toMatch(/stay charged/);
	});

	it('for a short capture ask for a week, and never call it more than an indication', () => {
		const { assessment } = reportSources({ snapshot: true });
		expect(suggestActions(assessment).map((one) => one.key)).toContain('measure-week');
		expect(suggestFindings(assessment, phase).join(' ')).toMatch(/indicative/);
	});

	it('find what exceeds, worst first', () => {
		const findings = suggestFindings(reportSources().assessment, phase);
		expect(findings[0]).toMatch(/demand distortion|5th harmonic/);
		expect(findings[0]).toMatch(/exceeded/);
	});
});

describe('small words', () => {
	it.each([
		['A', 'B'],
		['Z', 'AA'],
		['AZ', 'BA']
	])('revision %s is followed by %s', (from, to) => expect(nextRevision(from)).toBe(to));

	it('periods are those of the site', () => {
		expect(formatPeriod('2026-03-03T05:00:00Z', '2026-03-10T05:00:00Z', 'America/New_York')).toBe(
			'3 to 10 March 2026'
		);
		expect(formatPeriod('2026-02-28T12:00:00Z', '2026-03-06T12:00:00Z', 'UTC')).toBe(
			'28 February to 6 March 2026'
		);
	});
});
