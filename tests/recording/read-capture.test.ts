import { describe, expect, it } from 'vitest';
import { captureFacts } from '$lib/recording/capture-facts';
import { groupCaptureFiles, incompleteGroupSentence } from '$lib/recording/group-capture-files';
import { readCapture } from '$lib/recording/read-capture';
import type { CaptureFile } from '$lib/recording/recording';
import { writeComtrade } from '$lib/synthesis/comtrade-writer';
import type { WaveformToWrite } from '$lib/synthesis/comtrade-writer-header';
import { writeDelimitedWaveform } from '$lib/synthesis/delimited-text-writer';

const encode = (text: string) => new TextEncoder().encode(text);

const waveform: WaveformToWrite = {
	stationName: 'Fennimore',
	recorderName: 'R3',
	nominalFrequency_Hz: 50,
	start: { local: '2024-03-05T10:20:30.000000', utcOffset_min: null },
	sampleCount: 512,
	segments: [{ samplingRate_Hz: 5120, fromSample: 0, toSample: 512 }],
	channels: [
		{
			name: 'U_L1',
			unitAsWritten: 'kV',
			phaseHint: 'L1',
			valuesAre: 'secondary',
			ratio: { primary: 11_000, secondary: 110 },
			samples: Float64Array.from({ length: 512 }, (_, n) => 90 * Math.sin((2 * Math.PI * n) / 102.4))
		}
	]
};

const comtrade = (combined = false) =>
	writeComtrade(waveform, { revision: '2013', dataFormat: 'BINARY', stem: 'Survey 1', combined });

describe('files dragged in together', () => {
	it('are paired by stem, whatever the case, and in the order they came', () => {
		expect(
			groupCaptureFiles(['b.dat', 'week.csv', 'A.CFG', 'a.dat', 'B.cfg', 'a.HDR', 'a.csv', 'x.cff'])
		).toEqual([['B.cfg', 'b.dat'], ['week.csv'], ['A.CFG', 'a.dat', 'a.HDR'], ['a.csv'], ['x.cff']]);
	});

	it('are kept apart where two of one kind share a stem', () => {
		expect(groupCaptureFiles(['a.cfg', 'A.CFG', 'a.dat'])).toEqual([['a.cfg', 'a.dat'], ['A.CFG']]);
	});

	it.each([
		[['a.cfg'], 'a.cfg came without its data file; add a.dat.'],
		[['a.dat', 'a.hdr'], 'a.dat came without its configuration; add a.cfg.'],
		[['a.hdr'], 'a.hdr holds only notes; add a.cfg and a.dat.'],
		[['a.cfg', 'a.dat'], null],
		[['a.csv'], null]
	])('%j: %s', (group, sentence) => expect(incompleteGroupSentence(group)).toBe(sentence));
});

describe('a capture is recognised by content', () => {
	it.each([
		['COMTRADE, two files', comtrade(), 'COMTRADE'],
		['COMTRADE, data file first', [...comtrade()].reverse(), 'COMTRADE'],
		[
			'COMTRADE under other names',
			comtrade().map(({ bytes }, index) => ({ name: `file ${index}.bin`, bytes })),
			'COMTRADE'
		],
		['COMTRADE, combined', comtrade(true), 'COMTRADE'],
		[
			'COMTRADE, combined, under another name',
			comtrade(true).map(({ bytes }) => ({ name: 'x.txt', bytes })),
			'COMTRADE'
		],
		['delimited text', [writeDelimitedWaveform(waveform, { stem: 'w' })], 'delimited text'],
		[
			'delimited text named .dat',
			[{ ...writeDelimitedWaveform(waveform, { stem: 'w' }), name: 'w.dat' }],
			'delimited text'
		]
	])('%s', (_, files, format) => {
		const result = readCapture(files);
		if (!result.ok) throw new Error(result.problem.sentence);
		expect(result.value.format).toBe(format);
		expect(result.value.kind === 'waveform' && result.value.sampleCount).toBe(512);
	});

	const only = (name: string, ...bytes: number[]): CaptureFile[] => [{ name, bytes: Uint8Array.from(bytes) }];

	it.each([
		['nothing at all', [], 'No file was given'],
		['an empty file', only('a.csv'), 'a.csv is empty (0 bytes)'],
		['a lonely data file', [comtrade()[1] as CaptureFile], 'add Survey 1.cfg'],
		['a lonely configuration', [comtrade()[0] as CaptureFile], 'add Survey 1.dat'],
		['a workbook', only('a.xlsx', 0x50, 0x4b, 3, 4), 'a.xlsx begins (byte 0) like a packed archive'],
		['a PDF', only('a.pdf', 0x25, 0x50, 0x44, 0x46), 'a.pdf begins (byte 0) like a PDF document'],
		['binary under a text name', only('a.csv', 0x31, 0x2c, 0, 7), 'a.csv, byte 2'],
		['prose', [{ name: 'a.txt', bytes: encode('Dear all,\nplease find it.\n') }], 'a.txt: no table']
	])('%s is refused with a sentence', (_, files, words) => {
		const result = readCapture(files);
		expect(result.ok).toBe(false);
		expect(!result.ok && result.problem.sentence).toContain(words);
	});
});

describe('facts shown at once', () => {
	it('of a waveform', () => {
		const result = readCapture(comtrade());
		if (!result.ok) throw new Error(result.problem.sentence);
		const facts = captureFacts(result.value);
		expect(facts).toMatchObject({
			kind: 'waveform',
			format: 'COMTRADE',
			variant: '2013 BINARY',
			channelCount: 1,
			samplingRate_Hz: { lowest: 5120, highest: 5120 },
			interval_s: null,
			sampleCount: 512,
			nominalFrequency_Hz: 50,
			valuesAre: 'secondary'
		});
		expect(facts.duration_s).toBeCloseTo(0.1, 12);
		// Half of 5120 Hz is 2560 Hz: order 51 with its side bin of 5 Hz ends at 2555 Hz; orders stop at 50.
		expect(facts.highestOrder).toBe(50);
		expect(facts.channels[0]).toMatchObject({
			unitAsWritten: 'kV',
			ratio: { primary: 11_000, secondary: 110 },
			missingCount: 0
		});
	});

	it('count the orders that a low rate leaves', () => {
		const slow = { ...waveform, segments: [{ samplingRate_Hz: 1200, fromSample: 0, toSample: 512 }] };
		const result = readCapture(writeComtrade(slow, { revision: '1999', dataFormat: 'ASCII', stem: 'x' }));
		if (!result.ok) throw new Error(result.problem.sentence);
		// 600 Hz − 5 Hz leaves order 11 of 50 Hz (550 Hz) and not order 12 (600 Hz).
		expect(captureFacts(result.value).highestOrder).toBe(11);
	});
});
