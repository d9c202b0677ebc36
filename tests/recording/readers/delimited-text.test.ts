import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { splitHeading } from '$lib/recording/readers/delimited-text/heading-text';
import { readDelimitedText } from '$lib/recording/readers/delimited-text/read-delimited-text';
import { parseStamp } from '$lib/recording/readers/delimited-text/stamp-text';
import { parseTrendHeading } from '$lib/recording/readers/delimited-text/trend-heading';
import type { Recording, Trend } from '$lib/recording/recording';
import { PINNED_SEED } from '../../synthesis/waveform-arbitrary';

const readText = (text: string, name = 'site.csv') =>
	readDelimitedText([{ name, bytes: new TextEncoder().encode(text) }]);

function waveform(text: string): Recording {
	const result = readText(text);
	if (!result.ok) throw new Error(result.problem.sentence);
	if (result.value.kind !== 'waveform') throw new Error('taken for a trend');
	return result.value;
}

function trend(text: string): Trend {
	const result = readText(text);
	if (!result.ok) throw new Error(result.problem.sentence);
	if (result.value.kind !== 'trend') throw new Error('taken for a waveform');
	return result.value;
}

const codes = (content: Recording | Trend) => content.remarks.map(({ code }) => code);
const rows = (count: number, row: (n: number) => string) =>
	Array.from({ length: count }, (_, n) => row(n)).join('\n');

describe('stamps', () => {
	const DAY = Date.UTC(2024, 2, 5) / 86_400_000;
	it.each([
		['2024-03-05 10:20:30.125', { day: DAY, second: 37_230.125, utcOffset_min: null }],
		['2024-03-05T10:20:30Z', { day: DAY, second: 37_230, utcOffset_min: 0 }],
		['2024-03-05T10:20:30-05:30', { day: DAY, second: 37_230, utcOffset_min: -330 }],
		['05.03.2024 10:20', { day: DAY, second: 37_200, utcOffset_min: null }],
		['5/3/24 10:20:30', { day: DAY, second: 37_230, utcOffset_min: null }],
		['2024/3/5', { day: DAY, second: null, utcOffset_min: null }],
		['3:21:43 PM.135', { day: null, second: 55_303.135, utcOffset_min: null }],
		['12:00:00 AM', { day: null, second: 0, utcOffset_min: null }],
		['31.02.2024', null],
		['25:00:00', null],
		['13:00 PM', null],
		['12.5', null]
	])('%s', (text, stamp) => expect(parseStamp(text, 'day-first')).toEqual(stamp));

	it('month first where the table needs it', () =>
		expect(parseStamp('03/05/2024 00:00', 'month-first')?.day).toBe(DAY));
});

describe('headings of samples', () => {
	it.each([
		['V1 (V)', 'V1', 'V'],
		['I_L1 [mA]', 'I_L1', 'mA'],
		['t[ms]', 't', 'ms'],
		['Time (microseconds)', 'Time', 'microseconds'],
		['U1 / kV', 'U1', 'kV'],
		['Current in A', 'Current', 'A'],
		['Va_V', 'Va', 'V'],
		['I_A', 'I_A', ''],
		['Ia_I', 'Ia_I', ''],
		['CH1', 'CH1', '']
	])('%s', (text, name, unit) => expect(splitHeading(text)).toEqual({ name, unit }));
});

describe('headings that damage has filled with blanks', () => {
	it('are split without trying every division of the blanks', () => {
		const text = `U_L1${' '.repeat(200_000)}x`;
		expect(splitHeading(text)).toEqual({ name: 'U_L1 x', unit: '' });
		expect(parseTrendHeading(text, 'V')).toBeTruthy();
	});
});

describe('headings of logs', () => {
	const meaning = (name: string, unit: string) => {
		const parsed = parseTrendHeading(name, unit);
		return 'leftOut' in parsed ? parsed.leftOut : [parsed.quantity, parsed.measure, parsed.unit];
	};
	const percent = 'percent-of-fundamental';

	it.each([
		['U_L1 h5', '%', ['voltage', { kind: 'order', order: 5 }, percent]],
		['I_L2 H05', 'A', ['current', { kind: 'order', order: 5 }, 'A']],
		['Current A order 13', '%', ['current', { kind: 'order', order: 13 }, percent]],
		['V1 harmonic 7', 'V', ['voltage', { kind: 'order', order: 7 }, 'V']],
		['IA 11th harmonic', '% of fundamental', ['current', { kind: 'order', order: 11 }, percent]],
		['THD U_L3', '%', ['voltage', { kind: 'thd' }, percent]],
		['I_L1 THD', '', ['current', { kind: 'thd' }, percent]],
		['Vrms L1', 'kV', ['voltage', { kind: 'rms' }, 'V']],
		['IA_avg', '', ['current', { kind: 'rms' }, 'A']],
		['Frequency', 'Hz', ['voltage', { kind: 'frequency' }, 'Hz']],
		['U_L1 h5', '', 'no unit: percent and absolute values cannot be told apart'],
		['I_L1 THD', '% r', 'percent of something else than the fundamental'],
		['U_L1 rms', '%', 'an rms value in percent'],
		['Active Power Total', 'W', 'another kind of figure'],
		['TDD I_L1', '%', 'another kind of figure'],
		['Current Phi AN', '', 'another kind of figure'],
		['Humidity', '%', 'neither a voltage nor a current by name or unit']
	])('%s, unit %s', (name, unit, expected) => expect(meaning(name, unit)).toEqual(expected));

	it('tell minima and maxima from averages', () => {
		const extreme = (name: string) => {
			const parsed = parseTrendHeading(name, 'A');
			return 'leftOut' in parsed ? parsed.leftOut : parsed.extreme;
		};
		expect(['IA_min', 'IA max', 'IA_avg', 'IA'].map(extreme)).toEqual(['minimum', 'maximum', null, null]);
	});
});

describe('tables of samples', () => {
	it('take the rate from lines above and the time from nowhere else', () => {
		const recording = waveform(
			`Site;Ostler Lane\nInstrument;Recorder 4\nDate;05.03.2024\nStart time;10:20:30\nSampling rate;12,8 kHz\nU_L1 (V);I_L1 (A)\n${rows(20, (n) => `${n},5;-${n},25`)}\n`
		);
		expect(recording.segments).toEqual([{ samplingRate_Hz: 12_800, fromSample: 0, toSample: 20 }]);
		expect(recording).toMatchObject({ stationName: 'Ostler Lane', recorderName: 'Recorder 4' });
		expect(recording.start).toEqual({ local: '2024-03-05T10:20:30', utcOffset_min: null });
		expect(recording.channels[1]?.samples[3]).toBe(-3.25);
	});

	it('scale milli and kilo units exactly', () => {
		const recording = waveform(`t (ms),U (kV),I (mA)\n${rows(20, (n) => `${n / 10},0.${n + 10},${n}.5`)}\n`);
		expect(recording.channels[0]?.samples[7]).toBe(170);
		expect(recording.channels[1]?.samples[7]).toBe(7.5 / 1000);
		expect(recording.segments[0]?.samplingRate_Hz).toBe(10_000);
	});

	it('may be separated by blanks, without headings', () => {
		const recording = waveform(rows(20, (n) => `  ${(n / 1000).toFixed(3)}   ${n}.25  -${n}.5`));
		expect(recording.segments[0]?.samplingRate_Hz).toBe(1000);
		expect(recording.channels.map(({ name, samples }) => [name, samples[4]])).toEqual([
			['Column 2', 4.25],
			['Column 3', -4.5]
		]);
	});

	it('keep quoted values and pass over lines that hold none', () => {
		const recording = waveform(
			`"Time (s)","U_L1 (V)"\n${rows(20, (n) => `"${n / 1000}","${n}.5"`)}\nEnd of data\n`
		);
		expect(recording.sampleCount).toBe(20);
		expect(codes(recording)).toEqual(['line-passed-over']);
		expect(recording.remarks[0]?.sentence).toContain('line 22, “End of data”');
	});

	it('take one value with a decimal comma where the heading is a single field', () => {
		const recording = waveform(`Sampling rate (Hz)\t12800\nU_L1 (V)\n${rows(20, (n) => `${n},5`)}\n`);
		expect(recording.channels.map(({ name, samples }) => [name, samples[3]])).toEqual([['U_L1', 3.5]]);
	});

	it('find the plainest rate that the written times allow', () => {
		const rateOf = (rate_Hz: number, digits: number) =>
			waveform(`Time (s),U_L1 (V)\n${rows(500, (n) => `${(n / rate_Hz).toFixed(digits)},1`)}\n`).segments[0]
				?.samplingRate_Hz;
		expect(rateOf(30_000, 6)).toBe(30_000);
		expect(rateOf(15_360, 7)).toBe(15_360);
		// Steps of exactly 0.26 ms are no 3 800 Hz.
		expect(rateOf(1 / 0.00026, 5)).toBeCloseTo(3846.153846, 5);
	});

	it('name the first cell that is no number, and keep the row', () => {
		const recording = waveform(
			`Time (s),U_L1 (V)\n${rows(20, (n) => `${n / 1000},${n === 6 ? 'overload' : n}`)}\n`
		);
		expect(recording.channels[0]?.samples[6]).toBeNaN();
		expect(recording.remarks[0]?.sentence).toBe(
			'site.csv: 1 cell could not be read as a value, first “overload” on line 8; they count as missing.'
		);
		expect(codes(recording)).toContain('missing-samples');
	});

	it('keep uneven times, and never make a rate of them', () => {
		const recording = waveform(
			`Time (s),U_L1 (V)\n${rows(30, (n) => `${(n + (n > 9 ? 3 : 0)) / 1000},${n}`)}\n`
		);
		expect(recording.segments).toEqual([]);
		expect(recording.timeStamps_s?.[10]).toBeCloseTo(0.013, 12);
		expect(codes(recording)).toContain('uneven-time-stamps');
	});

	it('say where a stated rate and the time column disagree', () => {
		const recording = waveform(
			`Sampling rate (Hz),2000\nTime (s),U_L1 (V)\n${rows(20, (n) => `${n / 1000},${n}`)}\n`
		);
		expect(recording.segments[0]?.samplingRate_Hz).toBe(1000);
		expect(recording.remarks.find(({ code }) => code === 'rate-and-stamps-disagree')?.sentence).toContain(
			'line 1'
		);
	});

	it.each([
		['no rate', `U_L1 (V),I_L1 (A)\n${rows(20, (n) => `${n},${n}`)}`, 'sampling-rate-missing', 'line 2'],
		[
			'time runs back',
			`Time (s),U (V)\n${rows(20, (n) => `${n === 9 ? 0.002 : n / 1000},1`)}`,
			'time-not-rising',
			'line 11'
		],
		[
			'time unreadable',
			`Time (s),U (V)\n${rows(20, (n) => `${n === 9 ? 'x' : n / 1000},1`)}`,
			'time-unreadable',
			'line 11'
		],
		['only a time', `Time (s)\n${rows(20, (n) => `${n / 1000}`)}`, 'no-channels', 'line 2'],
		['no numbers', 'Dear all,\nplease find it\nattached.\n', 'no-table', 'line 1']
	])('are refused with file and place: %s', (_, text, code, place) => {
		const result = readText(text);
		expect(result.ok).toBe(false);
		if (result.ok) return;
		expect(result.problem).toMatchObject({ code, file: 'site.csv', place });
		expect(result.problem.sentence).toContain('site.csv');
		expect(result.problem.sentence).toContain(place);
	});
});

describe('logs', () => {
	const minutes = (n: number, from = 0) => {
		const at = new Date(Date.UTC(2024, 9, 27) + (from + n * 10) * 60_000);
		return at.toISOString().slice(0, 16).replace('T', ' ');
	};

	it('read flags written as words', () => {
		const log = trend(
			`Start,I_L1 rms (A),Flagged\n${rows(12, (n) => `${minutes(n)},${n},${n === 4 ? 'yes' : 'no'}`)}\n`
		);
		expect([...(log.flagged ?? [])]).toEqual([0, 0, 0, 0, 1, 0, 0, 0, 0, 0, 0, 0]);
	});

	it('count on where the clock was set back at the end of summer time', () => {
		const log = trend(
			`Start,I_L1 rms (A)\n${rows(18, (n) => `${minutes(n)},1`)}\n${rows(12, (n) => `${minutes(n, 120)},1`)}\n`
		);
		expect(log.intervalStarts_s[18]).toBe(18 * 600);
		expect(log.intervalStarts_s[29]).toBe(29 * 600);
		expect(codes(log)).toEqual(['clock-set-back']);
		expect(log.remarks[0]?.sentence).toContain('about line 20: the clock was set back by 60 min');
	});

	it('caution about an hour without rows', () => {
		const log = trend(
			`Start,I_L1 rms (A)\n${rows(12, (n) => `${minutes(n)},1`)}\n${rows(12, (n) => `${minutes(n, 180)},1`)}\n`
		);
		expect(codes(log)).toEqual(['hour-without-rows', 'trend-gaps']);
	});

	it('say where a date can be read in two ways', () => {
		const log = trend(
			`Date,Time,I_L1 rms (A)\n${rows(12, (n) => `03/04/2024,10:${String(n).padStart(2, '0')}:00,1`)}\n`
		);
		expect(log.start.local).toBe('2024-04-03T10:00:00');
		expect(log.interval_s).toBe(60);
		expect(codes(log)).toContain('date-order-ambiguous');
	});

	it.each([
		[
			'no date',
			`Time,I_L1 rms (A)\n${rows(12, (n) => `10:${String(n).padStart(2, '0')}:00,1`)}`,
			'trend-without-date'
		],
		['no known heading', `Start,Humidity (%)\n${rows(12, (n) => `${minutes(n)},1`)}`, 'trend-columns'],
		[
			'a row out of order',
			`Start,I_L1 rms (A)\n${rows(12, (n) => `${minutes(n === 6 ? 4 : n)},1`)}`,
			'time-not-rising'
		]
	])('are refused: %s', (_, text, code) => {
		const result = readText(text);
		expect(!result.ok && result.problem.code).toBe(code);
		expect(!result.ok && result.problem.sentence).toContain('site.csv');
	});
});

describe('mutated tables', () => {
	const originals = [
		`Time (s),U_L1 (V),I_L1 (mA)\n${rows(60, (n) => `${n / 1000},${n}.5,-${n}.25e1`)}\n`,
		`Zeit;Spannung;Strom\ns;V;A\n${rows(60, (n) => `0,0${String(n).padStart(2, '0')};${n},5;-${n},25`)}\n`,
		`Start,U_L1 h5 (%),Flagged\n${rows(60, (n) => `2024-03-05 10:${String(n).padStart(2, '0')}:00,3.${n},0`)}\n`
	].map((text) => new TextEncoder().encode(text));

	it('never throw, and every refusal names the file', () => {
		const edit = fc.record({
			at: fc.nat(100_000),
			kind: fc.constantFrom(0, 0, 0, 1, 2, 3),
			byte: fc.oneof(fc.nat(255), fc.constantFrom(0x2c, 0x3b, 0x09, 0x0a, 0x0d, 0x22, 0x30, 0x3a, 0x2d))
		});
		fc.assert(
			fc.property(fc.nat(2), fc.array(edit, { minLength: 1, maxLength: 6 }), (which, edits) => {
				let bytes = [...(originals[which] as Uint8Array)];
				for (const { at, kind, byte } of edits) {
					const place = bytes.length === 0 ? 0 : at % bytes.length;
					if (kind === 0) bytes[place] = byte;
					else if (kind === 1) bytes.splice(place, 1 + (byte % 40));
					else if (kind === 2) bytes.splice(place, 0, byte, byte);
					else bytes = bytes.slice(0, place);
				}
				const result = readDelimitedText([{ name: 'site.csv', bytes: Uint8Array.from(bytes) }]);
				if (!result.ok) expect(result.problem.sentence).toContain('site.csv');
				else if (result.value.kind === 'waveform')
					for (const { samples } of result.value.channels)
						expect(samples.length).toBe(result.value.sampleCount);
				else
					for (const { values } of result.value.series)
						expect(values.length).toBe(result.value.intervalStarts_s.length);
			}),
			{ seed: PINNED_SEED, numRuns: 3000 }
		);
	});
});
