import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { readComtrade } from '$lib/recording/readers/comtrade/read-comtrade';
import type { CaptureFile } from '$lib/recording/recording';
import { writeComtrade } from '$lib/synthesis/comtrade-writer';
import type { WrittenDataFormat } from '$lib/synthesis/comtrade-writer-header';
import { PINNED_SEED } from '../../synthesis/waveform-arbitrary';

const encode = (text: string) => new TextEncoder().encode(text);
const decode = (bytes: Uint8Array | undefined) => new TextDecoder().decode(bytes);

function capture(dataFormat: WrittenDataFormat, combined = false): CaptureFile[] {
	const samples = (peak: number) =>
		Float64Array.from({ length: 64 }, (_, n) => peak * Math.sin((2 * Math.PI * n) / 32));
	return writeComtrade(
		{
			stationName: 'Bellwether',
			recorderName: 'R1',
			nominalFrequency_Hz: 60,
			start: { local: '2024-03-05T10:20:30.000000', utcOffset_min: null },
			sampleCount: 64,
			segments: [{ samplingRate_Hz: 1920, fromSample: 0, toSample: 64 }],
			channels: [
				{ name: 'VA', phaseHint: 'L1', unitAsWritten: 'kV', samples: samples(392) },
				{ name: 'IA', phaseHint: 'L1', unitAsWritten: 'A', samples: samples(120) }
			],
			statusChannelNames: ['Trip']
		},
		{ revision: '2013', dataFormat, stem: 'survey', combined }
	);
}

/** The ASCII capture with one line of its configuration replaced; line numbers count from 1. */
function withLine(line: number, text: string): CaptureFile[] {
	const [cfg, dat] = capture('ASCII') as [CaptureFile, CaptureFile];
	const lines = decode(cfg.bytes).split('\r\n');
	lines[line - 1] = text;
	return [{ name: cfg.name, bytes: encode(lines.join('\r\n')) }, dat];
}

// Lines of the configuration: 1 station, 2 counts, 3–4 analogue, 5 status, 6 frequency, 7 rate count,
// 8 rate, 9 start, 10 trigger, 11 format, 12 multiplier, 13 time code, 14 clock quality.
describe('a configuration with one bad line is refused with file, line and expectation', () => {
	it.each([
		[2, 'three,2A,1D', 'read', ''],
		[2, '3,2B,1D', 'line 2', 'channel counts'],
		[3, '1,VA,A,,kV,0,0045,0,0,-99998,99998,1,1,P,extra', 'line 3', 'decimal commas'],
		[4, '2,IA,A,,A,abc,0,0,-99998,99998,1,1,P', 'line 4', 'multiplier a'],
		[4, '2,IA,A,,A,1e300,0,0,-99998,99998,1,1,P', 'line 4', 'multiplier a'],
		[8, '1920,1e300', 'line 8', 'sampling rate 1 of 1'],
		[4, '2,IA,A', 'line 4', 'analogue channel 2 of 2'],
		[5, 'Trip', 'line 5', 'status channel 1 of 1'],
		[6, 'sixty', 'line 6', 'line frequency'],
		[7, '1920,64', 'line 7', 'number of sampling rates'],
		[8, '-1,64', 'line 8', 'sampling rate 1 of 1'],
		[8, '1920,0', 'line 8', 'sampling rate 1 of 1'],
		[11, 'HEX', 'line 11', 'ASCII, BINARY, BINARY32, FLOAT32']
	])('line %i as %j: %s', (line, text, place, words) => {
		const result = readComtrade(withLine(line, text));
		if (place === 'read') {
			expect(result.ok && result.value.remarks.map(({ code }) => code)).toEqual(['channel-total-mismatch']);
			return;
		}
		expect(result.ok).toBe(false);
		if (result.ok) return;
		expect(result.problem.file).toBe('survey.cfg');
		expect(result.problem.place).toBe(place);
		expect(result.problem.sentence).toContain('survey.cfg');
		expect(result.problem.sentence).toContain(place);
		expect(result.problem.sentence).toContain(words);
	});

	it('says where a configuration ends too soon', () => {
		const [cfg, dat] = capture('ASCII') as [CaptureFile, CaptureFile];
		const lines = decode(cfg.bytes).split('\r\n').slice(0, 7).join('\r\n');
		const result = readComtrade([{ name: cfg.name, bytes: encode(lines) }, dat]);
		expect(!result.ok && result.problem.sentence).toBe(
			'survey.cfg ends after line 7; sampling rate 1 of 1 (rate in Hz, number of the last sample at this rate, more than 0) was expected on line 8.'
		);
	});
});

describe('what a damaged configuration says of itself', () => {
	it('names no control characters to people', () => {
		const result = readComtrade(withLine(3, '1,V\u0000\u0012A,A,,kV,3.92e-06,0,7.5,-99998,99998,1,1,P'));
		if (!result.ok) throw new Error(result.problem.sentence);
		expect(result.value.channels[0]?.name).toBe('V A');
		// eslint-disable-next-line no-control-regex -- what must not be there
		for (const { sentence } of result.value.remarks) expect(sentence).not.toMatch(/[\u0000-\u001f]/);
	});

	it('names the line that lists no analogue channel, wherever it stands', () => {
		const result = readComtrade(withLine(1, 'Bellwether,R1,2013\r\n\r\n1,0A,1D\r\n1,Trip,,,0'));
		expect(!result.ok && result.problem.place).toBe('line 3');
		expect(!result.ok && result.problem.sentence).toBe(
			'survey.cfg, line 3 lists no analogue channel; at least one voltage or current was expected.'
		);
	});
});

describe('a configuration with one odd line is read with a remark', () => {
	it.each([
		[1, 'Bellwether,R1,2050', 'revision-unknown'],
		[6, '0', 'line-frequency-missing'],
		[9, '31/02/2024,10:20:30.000000', 'date-unreadable'],
		[9, '03/25/2024,10:20:30.000000', 'date-order'],
		[12, 'x', 'time-multiplier'],
		[14, 'F,0', 'clock-not-reliable'],
		[3, '1,VA,A,,kV,3.92e-06,0,7.5,-99998,99998,1,1,P', 'skew']
	])('line %i as %j: %s', (line, text, code) => {
		const result = readComtrade(withLine(line, text));
		if (!result.ok) throw new Error(result.problem.sentence);
		expect(result.value.remarks.map((remark) => remark.code)).toContain(code);
	});

	it('keeps the skew of a channel in seconds', () => {
		const result = readComtrade(withLine(3, '1,VA,A,,kV,3.92e-06,0,7.5,-99998,99998,1,1,P'));
		expect(result.ok && result.value.channels[0]?.skew_s).toBe(7.5e-6);
		expect(result.ok && result.value.channels[1]?.skew_s).toBeUndefined();
	});
});

describe('files that do not belong together', () => {
	it('refuses a data file without its configuration', () => {
		const [, dat] = capture('BINARY') as [CaptureFile, CaptureFile];
		const result = readComtrade([dat]);
		expect(!result.ok && result.problem.sentence).toBe(
			'survey.dat came without its configuration; add survey.cfg and upload both together.'
		);
	});

	it('refuses binary data where text is announced, and names the byte', () => {
		const [cfg] = capture('ASCII') as [CaptureFile, CaptureFile];
		const [, dat] = capture('BINARY') as [CaptureFile, CaptureFile];
		const result = readComtrade([cfg, dat]);
		expect(!result.ok && result.problem.place).toBe('byte 0');
		expect(!result.ok && result.problem.code).toBe('dat-not-text');
	});

	it('refuses a row length that the sample numbers contradict', () => {
		const [cfg] = capture('BINARY') as [CaptureFile, CaptureFile];
		const [, dat] = capture('BINARY32') as [CaptureFile, CaptureFile];
		const result = readComtrade([cfg, dat]);
		expect(!result.ok && result.problem.code).toBe('dat-layout');
		expect(!result.ok && result.problem.sentence).toContain('sample number 2 was expected');
	});

	it('refuses text with other columns than the configuration lists', () => {
		const [cfg] = capture('ASCII') as [CaptureFile, CaptureFile];
		const rows = Array.from({ length: 64 }, (_, n) => `${n + 1},${n}`).join('\r\n');
		const result = readComtrade([cfg, { name: 'survey.dat', bytes: encode(rows) }]);
		expect(!result.ok && result.problem.code).toBe('dat-columns');
		expect(!result.ok && result.problem.sentence).toContain('5 numbers per row were expected');
	});

	it('leaves out a last row that was cut', () => {
		const [cfg, dat] = capture('ASCII') as [CaptureFile, CaptureFile];
		const cut = decode(dat.bytes)
			.trimEnd()
			.replace(/,[^,]*,[^,]*$/, '');
		const result = readComtrade([cfg, { name: dat.name, bytes: encode(cut) }]);
		if (!result.ok) throw new Error(result.problem.sentence);
		expect(result.value.sampleCount).toBe(63);
		expect(result.value.remarks.map(({ code }) => code)).toEqual(['dat-truncated', 'sample-count-mismatch']);
	});
});

describe('mutated captures', () => {
	const originals = [capture('ASCII'), capture('BINARY'), capture('FLOAT32', true), capture('ASCII', true)];

	function mutate(bytes: Uint8Array, edits: { at: number; kind: number; byte: number }[]): Uint8Array {
		let current = [...bytes];
		for (const { at, kind, byte } of edits) {
			const place = current.length === 0 ? 0 : at % current.length;
			if (kind === 0) current[place] = byte;
			else if (kind === 1) current.splice(place, 1 + (byte % 8));
			else if (kind === 2) current.splice(place, 0, byte, byte);
			else current = current.slice(0, place);
		}
		return Uint8Array.from(current);
	}

	it('never throw, and every refusal names its file', () => {
		const names = ['survey.cfg', 'survey.dat', 'survey.cff'];
		const edit = fc.record({
			at: fc.nat(100_000),
			kind: fc.constantFrom(0, 0, 0, 1, 2, 3),
			byte: fc.oneof(fc.nat(255), fc.constantFrom(0x2c, 0x0a, 0x30, 0x39, 0x2d))
		});
		fc.assert(
			fc.property(
				fc.nat(originals.length - 1),
				fc.nat(1),
				fc.array(edit, { minLength: 1, maxLength: 6 }),
				(which, part, edits) => {
					const files = (originals[which] as CaptureFile[]).map((file, index, { length }) =>
						index === part % length ? { name: file.name, bytes: mutate(file.bytes, edits) } : file
					);
					const result = readComtrade(files);
					if (result.ok) {
						for (const { samples } of result.value.channels)
							expect(samples.length).toBe(result.value.sampleCount);
						return;
					}
					expect(names).toContain(result.problem.file);
					expect(result.problem.sentence).toContain(result.problem.file);
				}
			),
			{ seed: PINNED_SEED, numRuns: 4000 }
		);
	});
});
