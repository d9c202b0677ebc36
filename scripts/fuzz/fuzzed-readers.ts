import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import fc, { type Arbitrary } from 'fast-check';
import { groupCaptureFiles, incompleteGroupSentence } from '../../src/lib/recording/group-capture-files';
import type { CaptureFile, TrendSeries } from '../../src/lib/recording/recording';
import { writeComtrade } from '../../src/lib/synthesis/comtrade-writer';
import type { ComtradeWriteOptions, WaveformToWrite } from '../../src/lib/synthesis/comtrade-writer-header';
import { writeDelimitedTrend, writeDelimitedWaveform } from '../../src/lib/synthesis/delimited-text-writer';
import { writeWav, type WavWriteOptions } from '../../src/lib/synthesis/wav-writer';
import { captureFaults } from './capture-faults';
import type { FuzzedReader } from './fuzzed-reader';

const FIXTURES = fileURLToPath(new URL('../../fixtures/captures/', import.meta.url));

/** A fixture; only its beginning where the rest is more of the same. */
function fixture(name: string, most_bytes = Infinity): CaptureFile {
	const bytes = new Uint8Array(readFileSync(FIXTURES + name));
	return { name, bytes: bytes.slice(0, Math.min(bytes.length, most_bytes)) };
}

const wave = (sampleCount: number, peak: number, shift: number) =>
	Float64Array.from({ length: sampleCount }, (_, n) => peak * Math.sin((2 * Math.PI * n) / 32 + shift));

/** Two cycles of two channels and one status channel: small, because every byte of it counts. */
function waveform(over: Partial<WaveformToWrite> = {}): WaveformToWrite {
	const sampleCount = over.sampleCount ?? 64;
	return {
		stationName: 'Bellwether',
		recorderName: 'R1',
		nominalFrequency_Hz: 50,
		start: { local: '2026-03-05T10:20:30.000000', utcOffset_min: null },
		sampleCount,
		segments: [{ samplingRate_Hz: 1600, fromSample: 0, toSample: sampleCount }],
		channels: [
			{ name: 'VA', phaseHint: 'L1', unitAsWritten: 'kV', samples: wave(sampleCount, 392, 0) },
			{ name: 'IA', phaseHint: 'L1', unitAsWritten: 'A', samples: wave(sampleCount, 120, 1) }
		],
		statusChannelNames: ['Trip'],
		...over
	};
}

const twoRates = () =>
	waveform({
		segments: [
			{ samplingRate_Hz: 1600, fromSample: 0, toSample: 40 },
			{ samplingRate_Hz: 800, fromSample: 40, toSample: 64 }
		]
	});

const unevenStamps = () =>
	waveform({
		segments: [],
		timeStamps_s: Float64Array.from({ length: 64 }, (_, n) => n / 1600 + (n % 3) * 1e-5)
	});

const comtrade = (dataFormat: ComtradeWriteOptions['dataFormat'], more: Partial<ComtradeWriteOptions> = {}) =>
	[waveform(), twoRates(), unevenStamps()].map((one) =>
		writeComtrade(one, { revision: '2013', stem: 'survey', dataFormat, ...more })
	);

const text = (name: string, content: string): CaptureFile => ({
	name,
	bytes: new TextEncoder().encode(content)
});

/** Fields that stand in configurations and tables, and some that do not. */
const field = fc.oneof(
	fc.constantFrom(
		'0',
		'1',
		'2',
		'3',
		'50',
		'60',
		'64',
		'1600',
		'99999',
		'-1',
		'',
		'A',
		'V',
		'kV',
		'P',
		'S',
		'ASCII',
		'BINARY'
	),
	fc.constantFrom(
		'05/03/2026',
		'10:20:30.000000',
		'2026-03-05 10:20:30',
		'1e400',
		'NaN',
		'1,5',
		'2A',
		'1D',
		'2013',
		'1999'
	),
	fc.integer().map(String),
	fc.double().map(String),
	fc.string({ maxLength: 12 })
);

const lines = (separators: string[]): Arbitrary<string> =>
	fc
		.record({
			rows: fc.array(fc.array(field, { minLength: 1, maxLength: 13 }), { minLength: 1, maxLength: 25 }),
			separator: fc.constantFrom(...separators),
			end: fc.constantFrom('\r\n', '\n')
		})
		.map(({ rows, separator, end }) => rows.map((row) => row.join(separator)).join(end));

const anyBytes = fc.uint8Array({ maxLength: 600 });

const madeUpComtrade = fc
	.tuple(
		lines([',']),
		fc.oneof(
			lines([',']).map((one) => new TextEncoder().encode(one)),
			anyBytes
		)
	)
	.map(([cfg, dat]) => [text('survey.cfg', cfg), { name: 'survey.dat', bytes: dat }]);

const madeUpCff = fc
	.tuple(
		lines([',']),
		fc.constantFrom('ASCII', 'BINARY', 'FLOAT32', ''),
		fc.oneof(fc.nat().map(String), field),
		anyBytes
	)
	.map(([cfg, format, size, data]) => {
		const head = text(
			'',
			`--- file type: CFG ---\r\n${cfg}\r\n--- file type: DAT ${format}: ${size} ---\r\n`
		).bytes;
		return [{ name: 'survey.cff', bytes: Uint8Array.from([...head, ...data]) }];
	});

const madeUpTable = lines([',', ';', '\t', '|', ' ', ', ']).map((table) => [text('table.csv', table)]);

/** A table with headings of the trade and numbers under them: closer to one that is read. */
const likelyTable = fc
	.record({
		headings: fc.array(
			fc.constantFrom(
				'Time',
				'Date',
				't [s]',
				'U L1 (V)',
				'I L1 A',
				'U1 H5 %',
				'V1 THD',
				'Freq [Hz]',
				'Flag',
				'IL2 rms',
				'5',
				'#'
			),
			{ minLength: 2, maxLength: 8 }
		),
		rows: fc.array(
			fc.array(fc.oneof(fc.double({ noNaN: true, min: -1e3, max: 1e3 }).map(String), field), {
				maxLength: 8
			}),
			{
				maxLength: 30
			}
		),
		step: fc.constantFrom('0.0001', '1', '3', '600', '0', '-1', 'x'),
		separator: fc.constantFrom(',', ';', '\t')
	})
	.map(({ headings, rows, step, separator }) => {
		const body = rows.map((row, i) =>
			[Number.isNaN(Number(step)) ? step : String(i * Number(step)), ...row].join(separator)
		);
		return [text('table.csv', [headings.join(separator), ...body].join('\r\n'))];
	});

function trendSeries(count: number): TrendSeries[] {
	const values = (level: number) =>
		Float64Array.from({ length: count }, (_, i) => level * (1 + (i % 7) / 100));
	const common = { quantity: 'voltage', phaseHint: 'L1' } as const;
	return [
		{ ...common, name: 'U L1', measure: { kind: 'rms' }, unit: 'V', values: values(230) },
		{
			...common,
			name: 'U L1 H5',
			measure: { kind: 'order', order: 5 },
			unit: 'percent-of-fundamental',
			values: values(3)
		},
		{
			...common,
			name: 'U L1 H7',
			measure: { kind: 'order', order: 7 },
			unit: 'percent-of-fundamental',
			values: values(2)
		}
	];
}

const trendTable = (interval_s: number, separator: ',' | ';', decimal: '.' | ',') => [
	writeDelimitedTrend(
		{
			start: { local: '2026-03-05T00:00:00', utcOffset_min: 60 },
			intervalStarts_s: Float64Array.from({ length: 30 }, (_, i) => i * interval_s),
			flagged: Uint8Array.from({ length: 30 }, (_, i) => (i === 4 ? 1 : 0)),
			series: trendSeries(30)
		},
		{ stem: 'week', separator, decimal }
	)
];

const wav = (options: Omit<WavWriteOptions, 'stem'>): CaptureFile[] => [
	writeWav(
		{ samplingRate_Hz: 8000, channels: [wave(64, 0.9, 0), wave(64, 0.5, 1)] },
		{ stem: 'take', ...options }
	)
];

const riff = (...words: string[]) => words.flatMap((word) => [...word].map((letter) => letter.charCodeAt(0)));

/** Chunks of any name and length after the beginning of a wave file. */
const madeUpWav = fc
	.array(
		fc.record({
			id: fc.constantFrom('fmt ', 'data', 'LIST', 'bext', 'ds64', 'fact', 'junk', 'cue '),
			size: fc.oneof(fc.nat(80), fc.nat(0xffffffff), fc.constantFrom(0, 16, 18, 40, 0xffffffff)),
			content: fc.uint8Array({ maxLength: 80 })
		}),
		{ maxLength: 6 }
	)
	.map((chunks) => {
		const size = (value: number) => [value & 0xff, (value >>> 8) & 0xff, (value >>> 16) & 0xff, value >>> 24];
		const body = chunks.flatMap((one) => [...riff(one.id), ...size(one.size), ...one.content]);
		return [
			{
				name: 'take.wav',
				bytes: Uint8Array.from([...riff('RIFF'), ...size(body.length), ...riff('WAVE'), ...body])
			}
		];
	});

const faults: FuzzedReader['faults'] = (files) => captureFaults(files);

/** Beginnings by which files are told apart, with anything behind them. */
const BEGINNINGS = [
	[0x50, 0x4b, 0x03, 0x04],
	[0x52, 0x49, 0x46, 0x46, 0, 0, 0, 0, 0x57, 0x41, 0x56, 0x45],
	[0x40, 0x14, 0x11, 0x4a],
	[0xff, 0xfe],
	[0xfe, 0xff],
	[0xef, 0xbb, 0xbf],
	[0x25, 0x50, 0x44, 0x46],
	[0x1f, 0x8b],
	[]
];

const anyFile: Arbitrary<CaptureFile> = fc
	.record({
		name: fc.oneof(
			fc.constantFrom(
				'a.cfg',
				'A.DAT',
				'a.dat',
				'a.cff',
				'a.hdr',
				'a.inf',
				'a.csv',
				'a.txt',
				'a.pqd',
				'a.wav',
				'a.zip',
				'a',
				'.cfg'
			),
			fc.string({ minLength: 1, maxLength: 20 }).filter((name) => name.trim() !== '')
		),
		beginning: fc.constantFrom(...BEGINNINGS),
		rest: anyBytes
	})
	.map(({ name, beginning, rest }) => ({ name, bytes: Uint8Array.from([...beginning, ...rest]) }));

/** Every file comes out in one group, and only there. */
function groupingFaults(files: readonly CaptureFile[]): string[] {
	const names = files.map(({ name }) => name);
	const groups = groupCaptureFiles(names);
	groups.forEach(incompleteGroupSentence);
	return groups.flat().sort().join('\n') === [...names].sort().join('\n')
		? []
		: ['grouping loses or doubles a file'];
}

/** Every reader that is fuzzed. A new format is one entry more. */
export const FUZZED_READERS: FuzzedReader[] = [
	{
		name: 'comtrade-ascii',
		seeds: () => [
			...comtrade('ASCII'),
			...comtrade('ASCII', { revision: '1999' }),
			[fixture('four-wire-1999-ascii.cfg'), fixture('four-wire-1999-ascii.dat', 4000)]
		],
		madeUp: madeUpComtrade,
		faults
	},
	{
		name: 'comtrade-binary',
		seeds: () => [
			...comtrade('BINARY'),
			...comtrade('BINARY', { revision: '1999' }),
			[fixture('four-wire-1999-binary.cfg'), fixture('four-wire-1999-binary.dat', 4000)]
		],
		madeUp: madeUpComtrade,
		faults
	},
	{ name: 'comtrade-binary32', seeds: () => comtrade('BINARY32'), faults },
	{ name: 'comtrade-float32', seeds: () => comtrade('FLOAT32'), faults },
	{
		name: 'comtrade-cff',
		seeds: () =>
			(['ASCII', 'BINARY', 'BINARY32', 'FLOAT32'] as const).flatMap((format) =>
				comtrade(format, { combined: true })
			),
		madeUp: madeUpCff,
		faults
	},
	{
		name: 'text-waveform',
		seeds: () => [
			...(['seconds', 'stamps', 'rate-line'] as const).flatMap((time) => [
				[writeDelimitedWaveform(waveform(), { stem: 'survey', time })],
				[writeDelimitedWaveform(waveform(), { stem: 'survey', time, separator: ';', decimal: ',' })]
			]),
			[fixture('four-wire-decimal-comma.csv', 6000)]
		],
		madeUp: fc.oneof(madeUpTable, likelyTable),
		faults
	},
	{
		name: 'text-trend',
		seeds: () => [
			trendTable(600, ',', '.'),
			trendTable(3, ';', ','),
			[fixture('one-day-ten-minutes.csv', 6000)]
		],
		madeUp: fc.oneof(madeUpTable, likelyTable),
		faults
	},
	{
		name: 'wav',
		seeds: () => [
			...(['uint8', 'int16', 'int24', 'int32', 'float32', 'float64'] as const).map((samples) =>
				wav({ samples })
			),
			wav({ samples: 'int16', form: 'RF64', extensible: true }),
			wav({ samples: 'int24', openSize: 'all ones', strangeChunks: true }),
			wav({
				samples: 'float32',
				openSize: 'zero',
				info: { INAM: 'Bellwether', ICRD: '2026-03-05' },
				broadcast: { description: 'mains', originator: 'R1', local: '2026-03-05T10:20:30' }
			})
		],
		madeUp: madeUpWav,
		faults
	},
	{
		name: 'any-files',
		seeds: () => [
			[...comtrade('ASCII')[0]!, ...trendTable(600, ',', '.')],
			comtrade('BINARY', { combined: true })[0]!
		],
		madeUp: fc.array(anyFile, { minLength: 1, maxLength: 4 }),
		faults: (files) => [...groupingFaults(files), ...captureFaults(files)]
	}
];
