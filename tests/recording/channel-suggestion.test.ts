import { describe, expect, it } from 'vitest';
import { suggestMappings, type SuggestionPoint } from '$lib/recording/channel-suggestion';
import { DEFAULT_PHASE_NAMES } from '$lib/recording/phase';
import type { Recording, RecordingChannel, Trend } from '$lib/recording/recording';

const point: SuggestionPoint = {
	system: 'four-wire',
	phaseNames: DEFAULT_PHASE_NAMES,
	voltageTransformer: null,
	currentTransformer: { primary: 1600, secondary: 5 }
};

function channel(overrides: Partial<RecordingChannel>): RecordingChannel {
	return {
		index: 0,
		name: 'VA',
		phaseHint: 'L1',
		unitAsWritten: 'V',
		baseUnit: 'V',
		quantity: 'voltage',
		samples: new Float64Array(2),
		valuesAre: 'primary',
		ratio: null,
		range: null,
		...overrides
	};
}

function recording(...channels: Partial<RecordingChannel>[]): Recording {
	return {
		kind: 'waveform',
		format: 'COMTRADE',
		variant: '1999 BINARY',
		stationName: '',
		recorderName: '',
		nominalFrequency_Hz: 60,
		start: null,
		sampleCount: 2,
		segments: [{ samplingRate_Hz: 7680, fromSample: 0, toSample: 2 }],
		timeStamps_s: null,
		channels: channels.map((overrides, index) => channel({ ...overrides, index })),
		statusChannelNames: [],
		remarks: []
	};
}

const current = { name: 'IA', unitAsWritten: 'A', baseUnit: 'A', quantity: 'current' as const };
const suggest = (content: Recording, at: SuggestionPoint = point) => suggestMappings(content, at);

describe('suggested mappings', () => {
	it('need no factor for primary values', () => {
		expect(suggest(recording({}))[0]).toMatchObject({
			mapping: { quantity: 'voltage', phase: 'L1', toPrimary: 1 },
			confidence: 'stated'
		});
	});

	it('multiply secondary values by the file’s ratio, and only else by the point’s', () => {
		const own = { ...current, valuesAre: 'secondary' as const, ratio: { primary: 2000, secondary: 5 } };
		expect(suggest(recording(own))[0]?.mapping?.toPrimary).toBe(400);
		const none = { ...own, ratio: null };
		expect(suggest(recording(none))[0]?.mapping?.toPrimary).toBe(320);
		expect(suggest(recording(none))[0]?.reason).toContain('1600:5');
		const unit = { ...own, ratio: { primary: 1, secondary: 1 } };
		expect(suggest(recording(unit))[0]?.mapping?.toPrimary).toBe(320);
	});

	it('say so where nobody tells the side', () => {
		const [suggestion] = suggest(recording({ ...current, valuesAre: 'unknown' }));
		expect(suggestion?.mapping?.toPrimary).toBe(1);
		expect(suggestion?.confidence).toBe('likely');
		expect(suggestion?.reason).toContain('does not say whether its values are primary or secondary');
	});

	it.each([
		['a second feeder', [current, { ...current, name: 'IA_2' }], 1, '“IA” already gives the current of L1'],
		['direct voltage', [{ name: 'VDC_G1', phaseHint: null }], 0, 'direct voltage'],
		[
			'an unknown unit',
			[{ quantity: 'other' as const, unitAsWritten: 'Hz' }],
			0,
			'neither volts nor amperes'
		],
		['no unit', [{ quantity: 'other' as const, unitAsWritten: '', name: 'CH1' }], 0, 'gives no unit'],
		['no conductor', [{ phaseHint: null, name: 'Ux' }], 0, 'tells the conductor'],
		['the neutral’s voltage', [{ phaseHint: 'N' as const }], 0, 'neutral is not judged'],
		['a line-to-line voltage', [{ phaseHint: 'L1L2' as const }], 0, 'line-to-neutral voltages']
	])('leave out %s', (_, channels, index, words) => {
		const suggestion = suggest(recording(...channels))[index];
		expect(suggestion?.mapping).toBeNull();
		expect(suggestion?.reason).toContain(words);
	});

	it('take line-to-line voltages and caution about others at a three-wire point', () => {
		const threeWire = { ...point, system: 'three-wire' as const };
		const [pair, single] = suggest(recording({ phaseHint: 'L1L2' }, { phaseHint: 'L1' }), threeWire);
		expect(pair?.mapping?.phase).toBe('L1L2');
		expect(single?.reason).toContain('judged by line-to-line voltages');
	});

	it('know the one conductor of a single-phase point', () => {
		const single = { ...point, system: 'single-phase' as const };
		expect(suggest(recording({ phaseHint: null }), single)[0]?.mapping?.phase).toBe('L1');
	});

	it('map the series of a log by heading, but not its frequency', () => {
		const trend: Trend = {
			kind: 'trend',
			format: 'delimited text',
			variant: '',
			stationName: '',
			recorderName: '',
			nominalFrequency_Hz: null,
			start: { local: '2024-03-05T00:00:00', utcOffset_min: null },
			interval_s: 600,
			intervalStarts_s: Float64Array.of(0),
			flagged: null,
			series: [
				{
					name: 'I_L2 h5 (%)',
					quantity: 'current',
					phaseHint: 'L2',
					measure: { kind: 'order', order: 5 },
					unit: 'percent-of-fundamental',
					values: Float64Array.of(4)
				},
				{
					name: 'Frequency (Hz)',
					quantity: 'voltage',
					phaseHint: null,
					measure: { kind: 'frequency' },
					unit: 'Hz',
					values: Float64Array.of(50)
				}
			],
			remarks: []
		};
		const [order, frequency] = suggestMappings(trend, point);
		expect(order?.mapping).toEqual({ quantity: 'current', phase: 'L2', toPrimary: 1 });
		expect(frequency?.mapping).toBeNull();
	});
});
