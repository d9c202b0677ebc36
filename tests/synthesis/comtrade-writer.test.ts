import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { readComtrade } from '$lib/recording/readers/comtrade/read-comtrade';
import type { Recording, RecordingChannel } from '$lib/recording/recording';
import { writeComtrade } from '$lib/synthesis/comtrade-writer';
import type {
	ComtradeWriteOptions,
	WaveformChannelToWrite,
	WaveformToWrite
} from '$lib/synthesis/comtrade-writer-header';
import { PINNED_SEED, waveformArbitrary } from './waveform-arbitrary';

const VARIANTS: Omit<ComtradeWriteOptions, 'stem'>[] = [
	{ revision: '1991', dataFormat: 'ASCII' },
	{ revision: '1991', dataFormat: 'BINARY' },
	{ revision: '1999', dataFormat: 'ASCII' },
	{ revision: '1999', dataFormat: 'BINARY' },
	...(['ASCII', 'BINARY', 'BINARY32', 'FLOAT32'] as const).flatMap((dataFormat) => [
		{ revision: '2013' as const, dataFormat },
		{ revision: '2013' as const, dataFormat, combined: true }
	])
];

/** Half a quantisation step of the data format, relative to the largest sample; float32 keeps 24 bits. */
const HALF_STEP = {
	ASCII: 0.5 / 99_998,
	BINARY: 0.5 / 32_767,
	BINARY32: 0.5 / 2_147_483_647,
	FLOAT32: 2 ** -24
};

function readBack(waveform: WaveformToWrite, options: ComtradeWriteOptions): Recording {
	const result = readComtrade(writeComtrade(waveform, options));
	if (!result.ok) throw new Error(result.problem.sentence);
	return result.value;
}

function largest(samples: Float64Array): number {
	return samples.reduce((max, sample) => (Math.abs(sample) > max ? Math.abs(sample) : max), 0);
}

function expectChannel(
	ours: RecordingChannel,
	written: WaveformChannelToWrite,
	halfStep: number,
	revision: ComtradeWriteOptions['revision']
): void {
	expect(ours).toMatchObject({
		name: written.name,
		unitAsWritten: written.unitAsWritten,
		phaseHint: written.phaseHint,
		valuesAre: revision === '1991' ? 'unknown' : written.valuesAre,
		ratio: revision === '1991' ? null : written.ratio
	});
	const tolerance = (halfStep + 1e-14) * largest(written.samples);
	for (const [index, sample] of written.samples.entries()) {
		const read = ours.samples[index] as number;
		if (Number.isNaN(sample)) expect(read).toBeNaN();
		else expect(Math.abs(read - sample)).toBeLessThanOrEqual(tolerance);
	}
}

/** What a recorder may do to its text without changing what it says. */
const habitsArbitrary: fc.Arbitrary<Partial<ComtradeWriteOptions>> = fc.record({
	text: fc.record({
		lineEnd: fc.constantFrom('\r\n' as const, '\n' as const, '\r' as const, 'mixed' as const),
		encoding: fc.constantFrom('utf-8' as const, 'utf-8 with mark' as const, 'utf-16le' as const),
		padded: fc.boolean(),
		endMark: fc.boolean()
	}),
	missingMark: fc.constantFrom('' as const, '99999' as const, '999999' as const)
});

/** Remarks that tell of habits, and of what was written on purpose. */
const EXPECTED_REMARKS = [
	'missing-samples',
	'status-changed',
	'status-not-normal',
	'byte-order-mark',
	'text-encoding'
];

function expectStatus(recording: Recording, waveform: WaveformToWrite): void {
	expect(recording.statusActivity).toEqual(
		waveform.statusChannelNames!.map((name, index) => {
			const states = [...waveform.statusStates![index]!];
			const changes = states.flatMap((state, n) => (n > 0 && state !== states[n - 1] ? [n] : []));
			return {
				name,
				normalState: waveform.normalStates![index],
				startsAs: states[0],
				changeCount: changes.length,
				firstChangeAtSample: changes[0] ?? null
			};
		})
	);
}

describe('COMTRADE written and read again', () => {
	it.each(VARIANTS)('with the habits of recorders: $revision $dataFormat, combined: $combined', (variant) => {
		fc.assert(
			fc.property(waveformArbitrary, habitsArbitrary, (waveform, habits) => {
				// UTF-16 and binary data cannot stand in one file.
				const isMixed = variant.combined && variant.dataFormat !== 'ASCII';
				const text = { ...habits.text, ...(isMixed ? { encoding: 'utf-8' as const } : {}) };
				const recording = readBack(waveform, { ...variant, ...habits, text, stem: 'capture' });
				expect(recording.sampleCount).toBe(waveform.sampleCount);
				expect(recording.segments).toEqual(waveform.segments);
				for (const [index, written] of waveform.channels.entries()) {
					const channel = recording.channels[index]!;
					expectChannel(channel, written, HALF_STEP[variant.dataFormat], variant.revision);
					expect(channel.missingCount).toBe(written.samples.filter(Number.isNaN).length);
				}
				expectStatus(recording, waveform);
				const codes = recording.remarks.map(({ code }) => code);
				expect(codes.filter((code) => !EXPECTED_REMARKS.includes(code))).toEqual([]);
			}),
			{ seed: PINNED_SEED, numRuns: 40 }
		);
	});

	it.each(VARIANTS)('with time stamps for a rate: $revision $dataFormat, combined: $combined', (variant) => {
		const steps = fc.array(fc.integer({ min: 50, max: 900 }), { minLength: 40, maxLength: 40 });
		fc.assert(
			fc.property(waveformArbitrary, steps, (waveform, steps_us) => {
				let elapsed_us = 0;
				const timeStamps_s = Float64Array.from({ length: waveform.sampleCount }, (_, n) =>
					n === 0 ? 0 : (elapsed_us += steps_us[n]!) / 1e6
				);
				const recording = readBack(
					{ ...waveform, segments: [], timeStamps_s },
					{ ...variant, stem: 'capture' }
				);
				if (recording.timeStamps_s)
					for (const [n, time_s] of timeStamps_s.entries())
						expect(recording.timeStamps_s[n]).toBeCloseTo(time_s, 12);
				else
					expect(recording.segments[0]!.samplingRate_Hz).toBeCloseTo(
						(waveform.sampleCount - 1) / timeStamps_s.at(-1)!,
						6
					);
				for (const [index, written] of waveform.channels.entries())
					expectChannel(recording.channels[index]!, written, HALF_STEP[variant.dataFormat], variant.revision);
			}),
			{ seed: PINNED_SEED, numRuns: 25 }
		);
	});

	it.each(VARIANTS)('$revision $dataFormat, combined: $combined', (variant) => {
		fc.assert(
			fc.property(waveformArbitrary, (waveform) => {
				const recording = readBack(waveform, { ...variant, stem: 'capture' });
				expect(recording.variant).toBe(`${variant.revision} ${variant.dataFormat}`);
				expect(recording).toMatchObject({
					stationName: waveform.stationName,
					recorderName: waveform.recorderName,
					nominalFrequency_Hz: 60,
					sampleCount: waveform.sampleCount,
					segments: waveform.segments,
					statusChannelNames: waveform.statusChannelNames
				});
				expect(recording.start).toEqual({
					local: waveform.start.local,
					utcOffset_min: variant.revision === '2013' ? waveform.start.utcOffset_min : null
				});
				for (const [index, written] of waveform.channels.entries())
					expectChannel(
						recording.channels[index] as RecordingChannel,
						written,
						HALF_STEP[variant.dataFormat],
						variant.revision
					);
				const codes = recording.remarks.map(({ code }) => code);
				expect(codes.filter((code) => !EXPECTED_REMARKS.includes(code))).toEqual([]);
			}),
			{ seed: PINNED_SEED, numRuns: 60 }
		);
	});
});

const sine = (sampleCount: number, rate_Hz: number): WaveformToWrite => ({
	stationName: 'Kestrel Row',
	recorderName: 'Recorder 2',
	nominalFrequency_Hz: 50,
	start: { local: '2024-03-05T10:20:30.123456789', utcOffset_min: 60 },
	sampleCount,
	segments: [{ samplingRate_Hz: rate_Hz, fromSample: 0, toSample: sampleCount }],
	channels: [
		{
			name: 'U_L1, bus A',
			unitAsWritten: 'V',
			samples: Float64Array.from(
				{ length: sampleCount },
				(_, n) => 325 * Math.sin((2 * Math.PI * 50 * n) / rate_Hz)
			)
		}
	]
});

describe('what the writer has to keep apart', () => {
	it('keeps nanoseconds of the start, and stamps that agree with the rate', () => {
		const recording = readBack(sine(500, 12_800), { revision: '2013', dataFormat: 'BINARY', stem: 'x' });
		expect(recording.start?.local).toBe('2024-03-05T10:20:30.123456789');
		expect(recording.remarks).toEqual([]);
	});

	it('writes a comma inside a name as a blank', () => {
		const recording = readBack(sine(20, 12_800), { revision: '1999', dataFormat: 'ASCII', stem: 'x' });
		expect(recording.channels[0]?.name).toBe('U_L1  bus A');
	});

	it('clips at a stated range, and the reader tells the range', () => {
		const waveform = sine(256, 12_800);
		const channels = waveform.channels.map((channel) => ({ ...channel, range: { min: -300, max: 300 } }));
		const recording = readBack(
			{ ...waveform, channels },
			{ revision: '1999', dataFormat: 'BINARY', stem: 'x' }
		);
		const channel = recording.channels[0] as RecordingChannel;
		expect(largest(channel.samples)).toBeCloseTo(300, 9);
		expect(channel.range?.max).toBeCloseTo(300, 9);
	});

	it('writes a gap between segments so that the reader finds it', () => {
		const waveform = sine(400, 10_000);
		waveform.segments = [
			{ samplingRate_Hz: 10_000, fromSample: 0, toSample: 200 },
			{ samplingRate_Hz: 10_000, fromSample: 200, toSample: 400, gapBefore_s: 1.5 }
		];
		const recording = readBack(waveform, { revision: '1999', dataFormat: 'BINARY', stem: 'x' });
		expect(recording.segments[1]?.gapBefore_s).toBeCloseTo(1.5, 6);
	});

	it('writes uneven stamps with a rate count of 0', () => {
		const waveform = {
			...sine(4, 1000),
			segments: [],
			timeStamps_s: Float64Array.of(0, 0.001, 0.003, 0.004)
		};
		const recording = readBack(waveform, { revision: '1999', dataFormat: 'ASCII', stem: 'x' });
		expect([...(recording.timeStamps_s ?? [])]).toEqual([0, 0.001, 0.003, 0.004]);
	});

	it('makes a rate of even stamps where none is stated', () => {
		const timeStamps_s = Float64Array.from({ length: 100 }, (_, n) => n / 15_360);
		const recording = readBack(
			{ ...sine(100, 15_360), segments: [], timeStamps_s },
			{ revision: '1999', dataFormat: 'ASCII', stem: 'x' }
		);
		// 99 steps between stamps rounded to 1 µs: the rate is known to 1 µs in 6.45 ms.
		expect(Math.abs((recording.segments[0]?.samplingRate_Hz ?? NaN) / 15_360 - 1)).toBeLessThan(1.6e-4);
		expect(recording.remarks.map(({ code }) => code)).toEqual(['rate-from-stamps']);
	});

	it('widens the time multiplier where the stamps would not fit', () => {
		const waveform = sine(10, 1 / 1000);
		waveform.start.local = '2024-03-05T10:20:30.000000';
		const recording = readBack(waveform, { revision: '1999', dataFormat: 'BINARY', stem: 'x' });
		expect(recording.remarks).toEqual([]);
	});
});

describe('what the 2013 revision tells of the clock', () => {
	const read = (clock: ComtradeWriteOptions['clock']) =>
		readBack(sine(300, 12_800), {
			revision: '2013',
			dataFormat: 'BINARY',
			stem: 'x',
			...(clock ? { clock } : {})
		});
	const sentences = (recording: Recording) => recording.remarks.map(({ sentence }) => sentence);

	it.each([
		['0', null],
		['1', 'within 1 ns'],
		['4', 'within 1 µs'],
		['7', 'within 1 ms'],
		['9', 'within 100 ms'],
		['A', 'within 1 s'],
		['B', 'within 10 s'],
		['F', 'clock as failed'],
		['C', 'nothing is known of the clock'],
		['?', 'nothing is known of the clock']
	])('quality %s: %s', (quality, words) => {
		const said = sentences(read({ localOffset_min: 60, quality, leapSecond: 0 }));
		if (words === null) expect(said).toEqual([]);
		else expect(said.join()).toContain(words);
	});

	it.each([
		[0, null],
		[1, 'a leap second was added'],
		[2, 'a leap second was taken out'],
		[3, 'cannot tell leap seconds']
	] as const)('leap second %i: %s', (leapSecond, words) => {
		const said = sentences(read({ localOffset_min: 60, quality: '0', leapSecond }));
		if (words === null) expect(said).toEqual([]);
		else expect(said.join()).toContain(words);
	});

	it('the recorder may stand in another zone than its times', () => {
		const recording = read({ localOffset_min: -330, quality: '0', leapSecond: 0 });
		expect(recording.start?.utcOffset_min).toBe(60);
		expect(sentences(recording)).toEqual([
			'x.cfg, line 11: the times are written in UTC+1, and the recorder stood in UTC−5:30; UTC+1 was used.'
		]);
	});

	it('an x stands for a zone that is not told', () => {
		const recording = read({ localOffset_min: null, quality: '0', leapSecond: 0 });
		expect(recording.start?.utcOffset_min).toBe(60);
		expect(recording.remarks).toEqual([]);
	});
});

describe('names in the encodings of their country', () => {
	it.each([
		['windows-1251', 'Подстанция 7, ввод 2', 'Ток фазы А'],
		['ibm866', 'Подстанция 7, ввод 2', 'Ток фазы А'],
		['windows-1252', 'Estação de Medição', 'Tensão fase A'],
		['gb18030', '变电站一号', '甲线电压'],
		['utf-16be', 'Estação 变电站', 'Ток фазы А']
	] as const)('%s', (encoding, stationName, name) => {
		const waveform = sine(50, 12_800);
		waveform.stationName = stationName;
		waveform.channels[0]!.name = name;
		const recording = readBack(waveform, {
			revision: '1999',
			dataFormat: 'ASCII',
			stem: 'x',
			text: { encoding }
		});
		expect(recording.stationName).toBe(stationName.replace(',', ' '));
		expect(recording.channels[0]?.name).toBe(name);
		expect(recording.remarks.map(({ code }) => code)).toEqual(['text-encoding']);
	});
});

describe('text for people', () => {
	const notes = {
		hdr: 'Feeder 3, new drive.\nClamp 2 on L2.',
		inf: '[Public Record_Information]\nSource=Recorder 4'
	};

	it.each([false, true])('HDR and INF are kept and said, combined: %s', (combined) => {
		const recording = readBack(sine(50, 12_800), {
			revision: '2013',
			dataFormat: 'BINARY',
			stem: 'x',
			combined,
			notes
		});
		expect(recording.notes?.map(({ text }) => text).sort()).toEqual([notes.hdr, notes.inf].sort());
		expect(recording.remarks).toEqual([]);
	});

	it('are never needed: a section that holds anything at all changes nothing', () => {
		const strange = '\u0000\u0001 \n'.repeat(3000);
		const recording = readBack(sine(50, 12_800), {
			revision: '2013',
			dataFormat: 'BINARY',
			stem: 'x',
			combined: true,
			notes: { hdr: strange, inf: 'y'.repeat(5000) }
		});
		expect(recording.sampleCount).toBe(50);
		expect(recording.notes?.map(({ text }) => text.length)).toEqual([4002]);
		expect(recording.remarks.map(({ code }) => code)).toEqual(['note-cut']);
	});
});

it('rows without time stamps are read at the stated rate', () => {
	for (const dataFormat of ['ASCII', 'BINARY'] as const) {
		const recording = readBack(sine(50, 12_800), {
			revision: '1999',
			dataFormat,
			stem: 'x',
			withoutStamps: true
		});
		expect(recording.segments).toEqual([{ samplingRate_Hz: 12_800, fromSample: 0, toSample: 50 }]);
		expect(recording.remarks).toEqual([]);
	}
});
