import { describe, expect, it } from 'vitest';
import { judgedPhases, nominalVoltageOn_V, shortCircuitRatio } from '$lib/assessment/judged-phases';

describe('what 100 % of voltage is on a channel', () => {
	it.each([
		['four-wire', 480, 'L1', 480 / Math.sqrt(3)],
		['four-wire', 480, 'L1L2', 480],
		['three-wire', 13_800, 'L3L1', 13_800],
		['three-wire', 13_800, 'L1', 13_800 / Math.sqrt(3)],
		['single-phase', 230, 'L1', 230],
		['split-phase', 120, 'L2', 120],
		['split-phase', 120, 'L1L2', 240],
		['four-wire', 400, 'N', null]
	] as const)('%s %d V, channel %s', (system, nominalVoltage_V, phase, expected) => {
		expect(nominalVoltageOn_V({ system, nominalVoltage_V }, phase)).toBe(expected);
	});

	it('judges line-to-neutral at four wires and line-to-line at three', () => {
		expect(judgedPhases({ system: 'four-wire' }, 'voltage')).toEqual(['L1', 'L2', 'L3']);
		expect(judgedPhases({ system: 'three-wire' }, 'voltage')).toEqual(['L1L2', 'L2L3', 'L3L1']);
		expect(judgedPhases({ system: 'three-wire' }, 'current')).toEqual(['L1', 'L2', 'L3']);
		expect(judgedPhases({ system: 'split-phase' }, 'current')).toEqual(['L1', 'L2']);
	});

	it('knows no ratio while a current is missing or zero', () => {
		expect(shortCircuitRatio({ demandCurrent_A: null, shortCircuitCurrent_A: 1 })).toBeNull();
		expect(shortCircuitRatio({ demandCurrent_A: 0, shortCircuitCurrent_A: 1 })).toBeNull();
		expect(shortCircuitRatio({ demandCurrent_A: 2, shortCircuitCurrent_A: 62.4 })).toBe(31.2);
	});
});
