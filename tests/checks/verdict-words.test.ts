import { describe, expect, it } from 'vitest';
import { blockedRow, isBlockedRow } from '$lib/assessment/blocked-row';
import { sharedFindings, type RecordedCheck } from '$lib/checks/recorded-check';
import { headlineFigures } from '$lib/components/verdict/verdict-figures';
import type { LimitTable } from '$lib/limits/limit-set';

const expired = (capture: string): RecordedCheck => ({
	captureId: capture,
	capture,
	title: 'Calibration',
	outcome: 'warns',
	sentence: 'Recorder 1 was measuring without a calibration that counts.',
	overrule: null
});

describe('findings beside a verdict', () => {
	it('says one that several captures share once, with their names', () => {
		const found = sharedFindings([expired('a'), expired('b'), expired('b')]);
		expect(found.map(({ captures }) => captures)).toEqual([['a', 'b']]);
	});

	it('keeps apart one that was overruled in one capture only', () => {
		const overrule = { reason: 'Within its limits.', by: 'N. N.', at: '2026-03-10T15:00:00Z' };
		expect(sharedFindings([expired('a'), { ...expired('b'), overrule }])).toHaveLength(2);
	});
});

describe('headline figures without a value', () => {
	const notes = (blockedQuantities: ('voltage' | 'current')[]) =>
		headlineFigures({
			headline: { tdd: [], currentThd: [], voltageThd: [] },
			totalLimits: [],
			overLimit: [],
			blockedQuantities,
			demandCurrent_A: 100,
			phaseNames: { L1: 'L1', L2: 'L2', L3: 'L3', N: 'N' }
		})
			.slice(0, 3)
			.map((figure) => ('note' in figure ? figure.note : undefined));

	it('say that a check blocks the currents, and do not say that none were recorded', () => {
		expect(notes(['current'])).toEqual(['blocked by a check', 'blocked by a check', 'no voltages recorded']);
	});
	it('say what is not there while nothing is blocked', () => {
		expect(notes([])[1]).toBe('no currents recorded');
	});
});

it('a blocked row is told from one that lacks data', () => {
	const table = {
		key: 't',
		quantity: 'current',
		basis: 'demand-current',
		statistics: []
	} as unknown as LimitTable;
	const row = blockedRow(
		table,
		{ kind: 'order', order: 5 },
		{ limit_pct: 4, rowId: 1 } as Parameters<typeof blockedRow>[2],
		{ quantity: 'current', phase: 'L1', sentence: 'I1 is clipped.' }
	);
	expect(isBlockedRow(row)).toBe(true);
	expect(isBlockedRow({ ...row, reason: 'Not assessed: no data.' })).toBe(false);
});
