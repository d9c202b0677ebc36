import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { handleOf } from '$lib/recording/capture-handle';
import { readCapture } from '$lib/recording/read-capture';
import { openWav } from '$lib/recording/readers/wav/read-wav';
import type { Recording } from '$lib/recording/recording';
import { writeWav, type WavWriteOptions } from '$lib/synthesis/wav-writer';
import { PINNED_SEED } from '../../synthesis/waveform-arbitrary';

const wave = {
	samplingRate_Hz: 8000,
	channels: [
		Float64Array.from({ length: 100 }, (_, n) => 0.8 * Math.sin((2 * Math.PI * n) / 20)),
		Float64Array.from({ length: 100 }, (_, n) => 0.5 * Math.cos((2 * Math.PI * n) / 20))
	]
};
const written = (options: Partial<WavWriteOptions> = {}) =>
	writeWav(wave, { stem: 'w', samples: 'int16', ...options }).bytes;
const PLAIN_HEAD_BYTES = 44;

function read(bytes: Uint8Array) {
	return readCapture([{ name: 'w.wav', bytes }]);
}

function recordingOf(bytes: Uint8Array): Recording {
	const result = read(bytes);
	if (!result.ok || result.value.kind !== 'waveform') throw new Error('not read');
	return result.value;
}

/** The file with some bytes of its head replaced. */
function withBytes(at: number, ...values: number[]): Uint8Array {
	const bytes = written();
	bytes.set(values, at);
	return bytes;
}

/** A description of 8 bytes where 16 are the least. */
function withShortDescription(): Uint8Array {
	const bytes = written();
	return Uint8Array.from([
		...bytes.subarray(0, 16),
		...[8, 0, 0, 0],
		...bytes.subarray(20, 28),
		...bytes.subarray(36)
	]);
}

describe('a WAV file', () => {
	it('is recognised by its bytes, whatever its name', () => {
		const result = readCapture([{ name: 'capture.bin', bytes: written() }]);
		expect(result.ok && result.value.format).toBe('WAV');
	});

	it('comes as parts of full scale, and says that units and start are not in it', () => {
		const recording = recordingOf(written());
		expect(recording.channels.map(({ quantity, unitAsWritten }) => [quantity, unitAsWritten])).toEqual([
			['other', ''],
			['other', '']
		]);
		expect(recording.start).toBeNull();
		expect(recording.nominalFrequency_Hz).toBeNull();
		expect(recording.remarks.map(({ code }) => code)).toEqual(['wav-no-units', 'wav-no-clock']);
	});

	it('takes −32 768 as the value that it is, and not as a missing sample', () => {
		const lowest = writeWav(
			{ samplingRate_Hz: 8000, channels: [Float64Array.of(-1, 0, 1)] },
			{ stem: 'w', samples: 'int16' }
		);
		expect([...recordingOf(lowest.bytes).channels[0]!.samples]).toEqual([-1, 0, 1 - 2 ** -15]);
	});

	it('that was cut is read as far as it goes, with the missing part in numbers', () => {
		const recording = recordingOf(written().subarray(0, PLAIN_HEAD_BYTES + 4 * 60 + 3));
		expect(recording.sampleCount).toBe(60);
		expect(recording.remarks.map(({ sentence }) => sentence).slice(0, 2)).toEqual([
			'w.wav announces 100 samples a channel, but ends after 60; 40 samples (40 %) are missing at the end.',
			'w.wav ends in the middle of a sample: 3 bytes after byte 284 do not make up the 4 bytes of a sample and were left out.'
		]);
	});

	it('with a data chunk of length 0 before other chunks is empty, and not open', () => {
		const empty = writeWav(
			{ samplingRate_Hz: 8000, channels: [new Float64Array(0)] },
			{ stem: 'w', samples: 'int16' }
		).bytes;
		const tail = Uint8Array.of(...[...'note'].map((letter) => letter.charCodeAt(0)), 2, 0, 0, 0, 7, 7);
		const result = read(Uint8Array.from([...empty, ...tail]));
		expect(!result.ok && result.problem.code).toBe('wav-empty');
	});

	it.each([
		['RIFX', withBytes(3, 0x58), 'wav-not-wave', 'numbers of the other byte order'],
		['no sound', withBytes(8, 0x41, 0x56, 0x49, 0x20), 'wav-not-wave', '“AVI”, not sound'],
		['A-law', withBytes(20, 6), 'wav-format-not-read', 'written as A-law'],
		['an unknown format', withBytes(20, 0x77, 0x77), 'wav-format-not-read', 'format number 30583'],
		['no channels', withBytes(22, 0), 'wav-format', '0 channels at 8000 Hz'],
		['no rate', withBytes(24, 0, 0), 'wav-format', '2 channels at 0 Hz'],
		['40 bits', withBytes(32, 10, 0, 40), 'wav-format', '40 bits in 10 bytes'],
		['only a head', written().subarray(0, 12), 'wav-chunk-missing', 'but a “fmt” chunk'],
		['no data', written().subarray(0, 36), 'wav-chunk-missing', 'but a “data” chunk'],
		['data without a whole sample', written().subarray(0, 47), 'wav-empty', 'holds 3 bytes of samples'],
		[
			'a short description',
			withShortDescription(),
			'wav-format-short',
			'the description of the samples has 8 bytes'
		]
	])('%s is refused: file, place and expectation', (_, bytes, code, words) => {
		const result = read(bytes);
		expect(result.ok).toBe(false);
		if (result.ok) return;
		expect(result.problem.code).toBe(code);
		expect(result.problem.sentence).toContain('w.wav');
		expect(result.problem.sentence).toContain(result.problem.place);
		expect(result.problem.sentence).toContain(words);
		expect(result.problem.sentence).toContain('expected');
	});

	it('is read in place: only its head is looked at when it is opened', () => {
		const file = { name: 'long.wav', bytes: written({ strangeChunks: true }) };
		let asked = 0;
		const handle = handleOf(file);
		const opened = openWav({
			...handle,
			read(offset, into) {
				asked += into.length;
				handle.read(offset, into);
			}
		});
		expect(opened?.ok && opened.value.samples.kind).toBe('rows');
		expect(asked).toBeLessThan(200);
	});
});

describe('mutated WAV files', () => {
	it('never throw, and every refusal names its file', () => {
		const originals = [
			written(),
			written({ samples: 'int24', extensible: true, strangeChunks: true }),
			written({ form: 'RF64', samples: 'float32', info: { ICMT: 'x' } }),
			written({ broadcast: { description: 'd', originator: 'o', local: '2026-03-10T09:30:00.000000' } })
		];
		fc.assert(
			fc.property(
				fc.nat(originals.length - 1),
				fc.array(fc.tuple(fc.nat(800), fc.nat(255)), { minLength: 1, maxLength: 6 }),
				fc.option(fc.nat(900), { nil: null }),
				(which, edits, cut) => {
					const bytes = Uint8Array.from(originals[which]!);
					for (const [at, byte] of edits) bytes[at % bytes.length] = byte;
					const result = read(cut === null ? bytes : bytes.subarray(0, cut));
					if (result.ok && result.value.kind === 'waveform') {
						for (const { samples } of result.value.channels)
							expect(samples.length).toBe(result.value.sampleCount);
					} else if (!result.ok) expect(result.problem.sentence).toContain('w.wav');
				}
			),
			{ seed: PINNED_SEED, numRuns: 3000 }
		);
	});
});
