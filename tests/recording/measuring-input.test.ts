import { describe, expect, it } from 'vitest';
import {
	suggestChannels,
	type SuggestedChannel,
	type SuggestionPoint
} from '$lib/recording/channel-suggestion';
import {
	inputToPrimary,
	matchInputs,
	type InputSensor,
	type MeasuringInput,
	type MeasuringInstrument
} from '$lib/recording/measuring-input';
import { recorderOf } from '$lib/register/recorder-match';

const clamp: InputSensor = {
	name: 'Clamp 3',
	toPrimary: 1000,
	ratioText: '1000 A : 1 V',
	gives: 'voltage',
	ratedPrimary: 1000
};
const small: InputSensor = {
	...clamp,
	name: 'Clamp 7',
	toPrimary: 10,
	ratioText: '10 A : 1 V',
	ratedPrimary: 10
};
const transformer: InputSensor = {
	name: 'CT 1',
	toPrimary: 40,
	ratioText: '200 A : 5 A',
	gives: 'current',
	ratedPrimary: 200
};
const current = (name: string, sensor: InputSensor | null): MeasuringInput => ({
	name,
	quantity: 'current',
	sensor
});
const voltage = (name: string): MeasuringInput => ({ name, quantity: 'voltage', sensor: null });

const point: SuggestionPoint = {
	system: 'four-wire',
	phaseNames: { L1: 'L1', L2: 'L2', L3: 'L3', N: 'N' },
	voltageTransformer: null,
	currentTransformer: null
};
const channel = (index: number, name: string, change: Partial<SuggestedChannel> = {}): SuggestedChannel => ({
	index,
	name,
	unitAsWritten: 'V',
	quantity: 'voltage',
	phaseHint: null,
	valuesAre: 'unknown',
	ratio: null,
	...change
});
const recorder = (...inputs: MeasuringInput[]): MeasuringInstrument => ({ name: 'Recorder 2', inputs });

describe('the input behind a channel', () => {
	it('is found by its name, whatever signs stand between', () => {
		const inputs = [voltage('U L1'), current('I_L1', clamp)];
		const names = [
			{ name: 'i-l1', quantity: 'voltage' as const },
			{ name: 'UL1', quantity: 'voltage' as const },
			{ name: 'Aux', quantity: 'voltage' as const }
		];
		expect(matchInputs(names, inputs)).toEqual([1, 0, null]);
	});

	it('is found by its place only where everything fits', () => {
		const inputs = [voltage('In 1'), current('In 2', clamp)];
		const volts = { quantity: 'voltage' as const };
		expect(
			matchInputs(
				[
					{ name: 'a', ...volts },
					{ name: 'b', ...volts }
				],
				inputs
			)
		).toEqual([0, 1]);
		// A current in the file at a voltage input: the order is another one.
		expect(
			matchInputs(
				[
					{ name: 'a', quantity: 'current' },
					{ name: 'b', ...volts }
				],
				inputs
			)
		).toEqual([null, null]);
		expect(matchInputs([{ name: 'a', ...volts }], inputs)).toEqual([null]);
	});

	it('is not guessed between two of one name', () => {
		const twins = [
			{ name: 'I1', quantity: 'current' as const },
			{ name: 'i 1', quantity: 'current' as const }
		];
		expect(matchInputs(twins, [current('I1', null)])).toEqual([null, null]);
	});
});

describe('from the input to the primary', () => {
	it('counts the sensor, or the transformer at the point, or both where the sensor sits on its secondary', () => {
		const ct = { primary: 400, secondary: 5 };
		expect(inputToPrimary(current('I1', clamp), null)).toEqual({ toPrimary: 1000, throughBoth: false });
		expect(inputToPrimary(current('I1', clamp), ct)).toEqual({ toPrimary: 1000, throughBoth: false });
		expect(inputToPrimary(current('I1', small), ct)).toEqual({ toPrimary: 800, throughBoth: true });
		expect(inputToPrimary(current('I1', null), ct)).toEqual({ toPrimary: 80, throughBoth: false });
		expect(inputToPrimary(current('I1', { ...clamp, toPrimary: null }), ct)).toBeNull();
	});
});

describe('suggestions with the sensors of the instrument', () => {
	const first = (channels: SuggestedChannel[], instrument: MeasuringInstrument | null, at = point) =>
		suggestChannels(channels, 'delimited text', at, instrument)[0]!;

	it('read volts of a clamp as a current, name the sensor, and take the conductor from the input', () => {
		const suggestion = first([channel(0, 'I_L2')], recorder(current('I L2', clamp)));
		expect(suggestion.mapping).toEqual({ quantity: 'current', phase: 'L2', toPrimary: 1000 });
		expect(suggestion.confidence).toBe('likely');
		expect(suggestion.reason).toContain('Clamp 3');
		expect(suggestion.reason).toContain('1000 A : 1 V');
		expect(suggestion.reason).toContain('Recorder 2');
	});

	it('count both ratios for a small clamp on the secondary, and say so', () => {
		const at = { ...point, currentTransformer: { primary: 400, secondary: 5 } };
		const suggestion = first([channel(0, 'I L1')], recorder(current('I L1', small)), at);
		expect(suggestion.mapping?.toPrimary).toBe(800);
		expect(suggestion.reason).toContain('400:5');
	});

	it('leave amperes alone behind a sensor that gives volts: the recorder has counted it', () => {
		const amperes = channel(0, 'I L1', { unitAsWritten: 'A', quantity: 'current', phaseHint: 'L1' });
		expect(first([amperes], recorder(current('I L1', clamp))).mapping?.toPrimary).toBe(1);
	});

	it('take the ratio of a transformer for values of the secondary, and ask to check where the file is silent', () => {
		const amperes = { unitAsWritten: 'A', quantity: 'current' as const, phaseHint: 'L1' as const };
		const stated = first(
			[channel(0, 'I L1', { ...amperes, valuesAre: 'secondary' })],
			recorder(current('I L1', transformer))
		);
		expect(stated.mapping?.toPrimary).toBe(40);
		expect(stated.reason).not.toContain('Check this');
		const silent = first([channel(0, 'I L1', amperes)], recorder(current('I L1', transformer)));
		expect(silent.mapping?.toPrimary).toBe(40);
		expect(silent.reason).toContain('Check this');
	});

	it('let the file’s own word stand: primary values, or a ratio that it gives', () => {
		const amperes = { unitAsWritten: 'A', quantity: 'current' as const, phaseHint: 'L1' as const };
		const instrument = recorder(current('I L1', transformer));
		const primary = channel(0, 'I L1', { ...amperes, valuesAre: 'primary' });
		expect(first([primary], instrument).mapping?.toPrimary).toBe(1);
		const own = channel(0, 'I L1', {
			...amperes,
			valuesAre: 'secondary',
			ratio: { primary: 600, secondary: 5 }
		});
		expect(first([own], instrument).mapping?.toPrimary).toBe(120);
	});

	it('say that a ratio is not known instead of inventing one', () => {
		const unknown = { ...clamp, toPrimary: null, ratioText: '' };
		const suggestion = first([channel(0, 'I L1')], recorder(current('I L1', unknown)));
		expect(suggestion.mapping?.toPrimary).toBe(1);
		expect(suggestion.reason).toContain('not known');
	});

	it('are as before without an instrument', () => {
		const channels = [channel(0, 'UL1', { phaseHint: 'L1' })];
		expect(first(channels, null)).toEqual(first(channels, recorder()));
	});
});

describe('the recorder that a file names', () => {
	const instruments = [
		{ name: 'Recorder 2', serialNumber: 'R2-0417' },
		{ name: 'Recorder 5', serialNumber: '12' }
	];
	it.each([
		[['PQ box R2 0417', ''], 'Recorder 2'],
		[['', 'recorder 5'], 'Recorder 5'],
		[['unit 12'], undefined],
		[['', ''], undefined]
	])('%j is %s', (texts, name) => {
		expect(recorderOf(texts, instruments)?.name).toBe(name);
	});
	it('is none where two fit', () => {
		const twins = [...instruments, { name: 'Spare', serialNumber: 'R2-0417' }];
		expect(recorderOf(['R2-0417'], twins)).toBeNull();
	});
});
