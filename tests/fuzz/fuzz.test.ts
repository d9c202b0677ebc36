import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';
import { captureFaults, refusalFaults } from '../../scripts/fuzz/capture-faults';
import { FUZZED_READERS } from '../../scripts/fuzz/fuzzed-readers';
import { inputRandom } from '../../scripts/fuzz/input-random';
import { faultsOf, inputMaker } from '../../scripts/fuzz/make-input';
import { shrinkInput } from '../../scripts/fuzz/shrink-input';
import { watchedRun } from '../../scripts/fuzz/watched-run';

/** Of each reader; `npm run fuzz` reads 200,000 in all. */
const INPUTS = 400;
const SEED = 20261201;

describe.each(FUZZED_READERS)('$name', (reader) => {
	it(`reads or refuses ${INPUTS} damaged and made-up inputs, and says file, place and expectation`, () => {
		const make = inputMaker(reader, SEED);
		for (let input = 0; input < INPUTS; input++)
			expect(
				faultsOf(reader, make(input)),
				`npm run fuzz -- --reader ${reader.name} --seed ${SEED} --input ${input}`
			).toEqual([]);
	});
});

describe('the inputs', () => {
	it('are the same for one seed and number, and others for another', () => {
		const reader = FUZZED_READERS[0]!;
		const again = (seed: number, input: number) => inputMaker(reader, seed)(input).files;
		expect(again(5, 77)).toEqual(again(5, 77));
		expect(again(5, 77)).not.toEqual(again(6, 77));
		expect(again(5, 77)).not.toEqual(again(5, 78));
	});

	it('begin with files that are read', () => {
		for (const reader of FUZZED_READERS) expect(reader.seeds().length, reader.name).toBeGreaterThan(0);
	});
});

describe('the watch', () => {
	const module = fileURLToPath(new URL('./planted-readers.ts', import.meta.url));
	const run = (reader: string) =>
		watchedRun({ module, reader, seed: 1, from: 0, to: 4 }, { input_s: 1.5, memory_MB: 600 });

	it.each([
		['throws', /^thrown: RangeError: planted/],
		['hangs', /^not done after 1.5 s/],
		['eats-memory', /^more than 600 MB of memory/],
		['takes-much', /^\d+ MB of memory for one input/],
		['dies', /^the process ended with 3/]
	])('notices a reader that %s, names the input, and goes on behind it', async (reader, fault) => {
		const findings = await run(reader);
		// A process that was ended begins again at the third input, whose successor is then the second of the new process.
		expect(findings[0]?.input).toBe(1);
		expect(findings[0]?.faults[0]).toMatch(fault);
		expect(findings.every(({ input }) => input === 1 || input === 3)).toBe(true);
	});
});

describe('what counts as a fault', () => {
	const problem = {
		code: 'x',
		file: 'a.cfg',
		place: 'line 3',
		sentence: 'a.cfg, line 3: a number was expected.'
	};

	it('is a refusal without file, place or full stop, or with what only the program understands', () => {
		expect(refusalFaults(problem, ['a.cfg'])).toEqual([]);
		expect(refusalFaults({ ...problem, place: null }, ['a.cfg'])).toEqual([]);
		for (const sentence of [
			'line 3: a number was expected.',
			'a.cfg: a number was expected.',
			'a.cfg, line 3: a number was expected',
			'a.cfg, line 3: undefined was found.',
			'a.cfg, line 3: \u0000 was found.'
		])
			expect(refusalFaults({ ...problem, sentence }, ['a.cfg']).length, sentence).toBe(1);
		expect(refusalFaults(problem, ['b.cfg']).length).toBe(1);
	});

	it('is none in a table that is read', () => {
		const rows = Array.from({ length: 40 }, (_, n) => `${n / 1000},${Math.sin(n / 3)}`);
		const bytes = new TextEncoder().encode(['Time (s),U L1 (V)', ...rows].join('\n'));
		expect(captureFaults([{ name: 'a.csv', bytes }])).toEqual([]);
	});
});

describe('a smaller input', () => {
	it('keeps what makes it fail and little else', () => {
		const random = inputRandom(3);
		const noise = () => Uint8Array.from({ length: 400 }, () => random.whole(200));
		const bytes = Uint8Array.from([...noise(), 250, ...noise(), 251, ...noise()]);
		const fails = (files: { bytes: Uint8Array }[]) =>
			files.some((file) => file.bytes.includes(250) && file.bytes.includes(251));
		const smallest = shrinkInput(
			[
				{ name: 'other', bytes: noise() },
				{ name: 'a', bytes }
			],
			fails
		);
		expect(smallest.map(({ name }) => name)).toEqual(['a']);
		expect([...smallest[0]!.bytes]).toEqual([250, 251]);
	});
});
