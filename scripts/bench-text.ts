/**
 * npm run bench:text [-- --megabytes 64]
 *
 * How fast ASCII samples of COMTRADE are taken in, beside the plain way (lines and fields by split, Number) and beside
 * merely copying the bytes; all three on the same text in one run, the best of several turns each. Speeds depend on the
 * machine; the ratios are what to compare.
 */
import { parseArgs } from 'node:util';
import { handleOf } from '../src/lib/recording/capture-handle';
import { openComtrade } from '../src/lib/recording/readers/comtrade/read-comtrade';
import type { CaptureFile } from '../src/lib/recording/recording';
import type { SampleScratch } from '../src/lib/recording/sample-scratch';
import { writeComtrade } from '../src/lib/synthesis/comtrade-writer';
import { seededRandom } from '../src/lib/synthesis/waveform-random';

const TURNS = 5;
const CHANNELS = 6;

const { values } = parseArgs({ options: { megabytes: { type: 'string', default: '64' } } });

/** Scratch that keeps nothing, so that only the reading is measured. */
const nothingKept: SampleScratch = {
	create() {
		let size_bytes = 0;
		return {
			append: (bytes) => void (size_bytes += bytes.length),
			seal: () => ({ name: 'samples', size_bytes, read: (_, into) => void into.fill(0) })
		};
	}
};

function textCapture(megabytes: number): CaptureFile[] {
	const random = seededRandom(1);
	const sampleCount = 20_000;
	const [configuration, data] = writeComtrade(
		{
			stationName: 'Bench',
			recorderName: '',
			nominalFrequency_Hz: 50,
			start: { local: '2026-03-10T09:30:00.000000', utcOffset_min: null },
			sampleCount,
			segments: [{ samplingRate_Hz: 10_000, fromSample: 0, toSample: sampleCount }],
			channels: Array.from({ length: CHANNELS }, (_, c) => ({
				name: `U${c}`,
				unitAsWritten: 'V',
				samples: Float64Array.from({ length: sampleCount }, () => 400 * random.normal())
			}))
		},
		{ revision: '1999', dataFormat: 'ASCII', stem: 'bench' }
	) as [CaptureFile, CaptureFile];
	const times = Math.ceil((megabytes * 1e6) / data.bytes.length);
	const bytes = new Uint8Array(times * data.bytes.length);
	for (let i = 0; i < times; i++) bytes.set(data.bytes, i * data.bytes.length);
	return [configuration, { name: data.name, bytes }];
}

function bySplit(bytes: Uint8Array): number {
	let sum = 0;
	for (const line of new TextDecoder().decode(bytes).split('\r\n')) {
		const fields = line.split(',');
		for (let field = 1; field < fields.length; field++) sum += Number(fields[field]);
	}
	return sum;
}

/** Seconds of the fastest turn. */
function best_s(work: () => unknown): number {
	let best = Infinity;
	for (let turn = 0; turn < TURNS; turn++) {
		const started = performance.now();
		work();
		best = Math.min(best, (performance.now() - started) / 1000);
	}
	return best;
}

const files = textCapture(Number(values.megabytes));
const { bytes } = files[1]!;
const copied = new Uint8Array(bytes.length);
const handles = files.map(handleOf);
const results = {
	reader: best_s(() => {
		const opened = openComtrade(handles, nothingKept);
		if (!opened?.ok) throw new Error('not read');
	}),
	split: best_s(() => bySplit(bytes)),
	copy: best_s(() => copied.set(bytes))
};
const speed = (seconds: number) => `${(bytes.length / 1e6 / seconds).toFixed(0)} MB/s`;
console.log(
	`${(bytes.length / 1e6).toFixed(0)} MB of ASCII samples, ${CHANNELS} channels, best of ${TURNS} turns`
);
console.log(`reader              ${speed(results.reader)}`);
console.log(
	`split and Number    ${speed(results.split)}   the reader is ${(results.split / results.reader).toFixed(1)} times as fast`
);
console.log(
	`copying the bytes   ${speed(results.copy)}   the reader takes ${(results.reader / results.copy).toFixed(0)} times as long`
);
