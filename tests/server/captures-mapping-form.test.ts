import { describe, expect, it } from 'vitest';
import { DEFAULT_PHASE_NAMES } from '$lib/recording/phase';
import {
	hasErrors,
	parseFactor,
	readLines,
	scalingOf,
	trendLines,
	typedLines,
	waveformLines
} from '../../src/routes/(app)/surveys/[survey]/captures/[capture]/mapping-form';
import { readStart, startText } from '../../src/routes/(app)/surveys/[survey]/captures/[capture]/start-field';

const channel = (name: string, over = {}) => ({
	name,
	unitAsWritten: 'A',
	phaseHint: null,
	quantity: 'current',
	valuesAre: 'secondary',
	ratio: { primary: 400, secondary: 5 },
	...over
});
const suggestion = (channelIndex: number, phase: 'L1' | 'L2', toPrimary = 80) => ({
	channelIndex,
	mapping: { quantity: 'current' as const, phase, toPrimary },
	reason: 'because'
});

describe('the factor to primary', () => {
	it.each([
		['80', 80],
		['400/5', 80],
		['400:5', 80],
		['0,5', 0.5],
		['1 600/5', 320]
	])('reads %s', (text, factor) => expect(parseFactor(text)).toBeCloseTo(factor, 12));
	it.each(['', 'eighty', '400/', '400/0', '-80', '1/2/3', '0'])('refuses "%s"', (text) =>
		expect(parseFactor(text)).toBeNull()
	);
});

describe('a capture without units', () => {
	const channels = [channel('Channel 1 (left)', { unitAsWritten: '' }), channel('Channel 2 (right)')];
	const blank = waveformLines(channels, [], null, 'full-scale');
	const lines = (...typed: [quantity: '' | 'voltage' | 'current', factor: string][]) =>
		blank.map((line, i) => ({ ...line, phase: 'L1' as const, quantity: typed[i]![0], factor: typed[i]![1] }));
	const read = (...typed: [quantity: '' | 'voltage' | 'current', factor: string][]) =>
		readLines(lines(...typed), DEFAULT_PHASE_NAMES, 'full-scale');

	it('is a WAV, and no other', () => {
		expect(['WAV', 'COMTRADE', 'delimited text', 'PQDIF'].map(scalingOf)).toEqual([
			'full-scale',
			'ratio',
			'ratio',
			'ratio'
		]);
	});

	it('asks for full scale and assumes none', () => {
		expect(blank.map(({ factor, written }) => [factor, written])).toEqual([
			['', 'no unit, in parts of full scale'],
			['', 'no unit, in parts of full scale']
		]);
	});

	it.each([
		['voltage', '250 V', 250],
		['voltage', '6 kV', 6000],
		['voltage', '6,5 kV', 6500],
		['current', '25 A', 25],
		['current', '25', 25],
		['current', '800 mA', 0.8]
	] as const)('%s: %s', (quantity, typed, toPrimary) => {
		const { mappings, errors } = read([quantity, typed], ['', '']);
		expect(hasErrors(errors)).toBe(false);
		expect(mappings).toEqual([{ index: 0, quantity, phase: 'L1', toPrimary, fullScale: typed }]);
	});

	it.each([
		['voltage', '', 'Enter what full scale means, such as 250 V or 6 kV'],
		['current', '', 'cannot be analysed'],
		['voltage', '25 A', '“A” is not a unit of voltage'],
		['current', 'loud', '“loud” is not a current'],
		['voltage', '0 V', 'Full scale must be above 0'],
		['voltage', '-5 V', 'Full scale must be above 0']
	] as const)('refuses a channel of %s with “%s”', (quantity, typed, words) => {
		const { mappings, errors } = read([quantity, typed], ['', '']);
		expect(mappings).toEqual([]);
		expect(errors.lines[0]?.factor).toContain(words);
	});

	it('keeps what was typed, turned round or not', () => {
		const confirmed = [
			{ channelIndex: 0, quantity: 'voltage', phase: 'L1', toPrimary: -6000, fullScale: '6 kV' } as const
		];
		expect(waveformLines(channels, [], confirmed, 'full-scale')[0]).toMatchObject({
			factor: '6 kV',
			reversed: true
		});
	});
});

describe('the mapping form', () => {
	const channels = [channel('I1'), channel('I2')];
	const suggestions = [suggestion(0, 'L1'), suggestion(1, 'L2', -80)];

	it('starts from the suggestions, reversed ones as such', () => {
		const lines = waveformLines(channels, suggestions, null);
		expect(lines[1]).toMatchObject({ quantity: 'current', phase: 'L2', factor: '80', reversed: true });
		expect(readLines(lines, DEFAULT_PHASE_NAMES).mappings).toEqual([
			{ index: 0, quantity: 'current', phase: 'L1', toPrimary: 80 },
			{ index: 1, quantity: 'current', phase: 'L2', toPrimary: -80 }
		]);
	});

	it('keeps a channel that was left out before left out, whatever is suggested', () => {
		const confirmed = [
			{ channelIndex: 0, quantity: 'current' as const, phase: 'L1' as const, toPrimary: 80 }
		];
		expect(waveformLines(channels, suggestions, confirmed)[1]!.quantity).toBe('');
	});

	it('keeps what was typed, and says beside the field what to mend', () => {
		const form = new FormData();
		form.set('quantity_0', 'current');
		form.set('phase_0', 'L1');
		form.set('factor_0', 'eighty');
		form.set('quantity_1', 'current');
		const lines = typedLines(waveformLines(channels, suggestions, null), form);
		const { errors } = readLines(lines, DEFAULT_PHASE_NAMES);
		expect(lines[0]!.factor).toBe('eighty');
		expect(errors.lines[0]?.factor).toMatch(/400\/5/);
		expect(errors.lines[1]?.phase).toMatch(/conductor/);
		expect(hasErrors(errors)).toBe(true);
	});

	it('refuses two channels on one conductor, and a form without any', () => {
		const twice = waveformLines(channels, [suggestion(0, 'L1'), suggestion(1, 'L1')], null);
		expect(readLines(twice, DEFAULT_PHASE_NAMES).errors.lines[1]?.phase).toMatch(/already taken from I1/);
		const none = waveformLines(channels, [], null);
		expect(readLines(none, DEFAULT_PHASE_NAMES).errors.form).toMatch(/Nothing is mapped/);
	});

	it('maps the columns of a trend by conductor, and leaves the frequency alone', () => {
		const columns = [
			channel('I1 rms', { phaseHint: 'L1' }),
			channel('f', { unitAsWritten: 'Hz' }),
			channel('I1 h5', { phaseHint: 'L1', unitAsWritten: '%' })
		];
		const lines = trendLines(columns, [suggestion(0, 'L1', 1)], null);
		expect(lines).toMatchObject([{ indexes: [0, 2], phase: 'L1' }]);
		expect(readLines(lines, DEFAULT_PHASE_NAMES).mappings.map((mapping) => mapping.index)).toEqual([0, 2]);
	});
});

describe('the start of a recording', () => {
	// Berlin keeps UTC+1 in winter and UTC+2 from 29 March 2026 (IANA time zone database).
	it('is read by the clock at the site where the file leaves the zone open', () => {
		const start = { local: '2026-03-10T15:05:00', utcOffset_min: null };
		expect(readStart('2026-04-01T10:00', start, 'Europe/Berlin')).toMatchObject({
			ok: true,
			value: new Date('2026-04-01T08:00:00Z')
		});
		expect(startText(start, '2026-01-10T14:05:00.250Z', 'Europe/Berlin')).toEqual({
			told: false,
			written: true,
			local: '2026-01-10T15:05:00.250'
		});
	});

	it('is the file’s own where it tells the offset, whatever the form says', () => {
		const start = { local: '2026-03-10T15:05:00', utcOffset_min: -300 };
		expect(readStart('1999-01-01T00:00', start, 'Europe/Berlin')).toMatchObject({
			ok: true,
			value: new Date('2026-03-10T20:05:00Z')
		});
	});

	it.each(['', 'yesterday', '2026-02-30T10:00'])('asks for a moment that exists instead of "%s"', (text) => {
		expect(readStart(text, null, 'Europe/Berlin').ok).toBe(false);
	});
});
