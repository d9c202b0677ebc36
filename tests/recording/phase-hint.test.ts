import { describe, expect, it } from 'vitest';
import { phaseHints } from '$lib/recording/phase-hint';

const byName = (...names: string[]) => phaseHints(names.map((name) => ({ field: '', name })));

// Conductor names L1 L2 L3 N: IEC 60445; A B C, R S T and 1 2 3 are common practice.
describe('the conductor of a channel', () => {
	it.each([
		['IA_G1', 'L1'],
		['VC_GC1', 'L3'],
		['Ub2', 'L2'],
		['U_L1', 'L1'],
		['UL2', 'L2'],
		['I L3', 'L3'],
		['u1', 'L1'],
		['V1N', 'L1'],
		['U L3-N', 'L3'],
		['U12', 'L1L2'],
		['VAB', 'L1L2'],
		['Vbc', 'L2L3'],
		['U_L3L1', 'L3L1'],
		['UCA_avg', 'L3L1'],
		['IN', 'N'],
		['VN_GC1', 'N'],
		['3I0', 'N'],
		['Current B', 'L2'],
		['V ph-n CN', 'L3'],
		['Voltage L2', 'L2'],
		['Ia对侧', 'L1'],
		['3U0', null],
		['CH1', null],
		['V_ch1', null],
		['VDC_G1', null],
		['IRMS', null],
		['UBA', null],
		['Frequency', null],
		['Ux', null]
	])('%s: %s', (name, phase) => expect(byName(name)).toEqual([phase]));

	it('reads R, S, T only where all three are there', () => {
		expect(byName('IR', 'IS', 'IT')).toEqual(['L1', 'L2', 'L3']);
		expect(byName('UR', 'US', 'UT', 'URS')).toEqual(['L1', 'L2', 'L3', 'L1L2']);
		expect(byName('IA', 'IB', 'IS')).toEqual(['L1', 'L2', null]);
	});

	it('believes a phase field before a name, but a pair in the name before a single conductor', () => {
		expect(phaseHints([{ field: 'B', name: 'Feeder current' }])).toEqual(['L2']);
		expect(phaseHints([{ field: 'A', name: 'VAB' }])).toEqual(['L1L2']);
		expect(phaseHints([{ field: 'N', name: 'Ux' }])).toEqual(['N']);
	});

	it('takes a digit in the field for a conductor only where channels differ in it', () => {
		const fields = (digits: string[]) => phaseHints(digits.map((field) => ({ field, name: 'Current' })));
		expect(fields(['1', '2', '3'])).toEqual(['L1', 'L2', 'L3']);
		expect(fields(['1', '1', '1'])).toEqual([null, null, null]);
		expect(
			phaseHints([
				{ field: '1', name: 'Ib' },
				{ field: '1', name: 'Ic' }
			])
		).toEqual(['L2', 'L3']);
	});
});
