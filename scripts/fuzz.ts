/**
 * npm run fuzz -- [--inputs 200000] [--seed 1] [--reader NAME] [--input N] [--seconds 10] [--memory 512]
 *
 * Gives every reader damaged and made-up files, in processes that are watched: nothing may throw, hang or eat memory, and
 * every refusal names file, place and expectation. Inputs that were found wanting are written to test-results/fuzz. The same
 * seed gives the same inputs on every machine; --input reads a single one of them again and makes it smaller.
 */
import { mkdirSync, writeFileSync } from 'node:fs';
import { availableParallelism } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { parseArgs } from 'node:util';
import { FUZZED_READERS } from './fuzz/fuzzed-readers';
import { faultsOf, inputMaker } from './fuzz/make-input';
import { inputRandom, inputSeed } from './fuzz/input-random';
import { shrinkInput } from './fuzz/shrink-input';
import { watchedRun, type Finding } from './fuzz/watched-run';

const { values: options } = parseArgs({
	options: {
		inputs: { type: 'string', default: '200000' },
		seed: { type: 'string', default: '1' },
		reader: { type: 'string' },
		input: { type: 'string' },
		seconds: { type: 'string', default: '10' },
		memory: { type: 'string', default: '512' }
	}
});
const MODULE = fileURLToPath(new URL('./fuzz/fuzzed-readers.ts', import.meta.url));
const FOLDER = 'test-results/fuzz';
/** Inputs of one process: starting one costs as much as reading some hundreds. */
const STRETCH = 2500;

const seed = Number(options.seed);
const inputs = Number(options.inputs);
const bounds = { input_s: Number(options.seconds), memory_MB: Number(options.memory) };
const readers = FUZZED_READERS.filter(({ name }) => options.reader === undefined || name === options.reader);
if (![seed, inputs, ...Object.values(bounds)].every((value) => value >= 0) || readers.length === 0) {
	console.error(`Give numbers, and as --reader one of ${FUZZED_READERS.map(({ name }) => name).join(', ')}.`);
	process.exit(2);
}
process.exitCode = options.input === undefined ? await readAll() : readOne(Number(options.input));

async function readAll(): Promise<0 | 1> {
	const begin = performance.now();
	let count = 0;
	for (const [at, { name }] of readers.entries()) {
		const share = Math.floor(inputs / readers.length) + (at < inputs % readers.length ? 1 : 0);
		const findings = await readStretches(name, share);
		console.log(`${name.padEnd(20)} ${String(share).padStart(8)} inputs   ${findings.length} findings`);
		for (const finding of findings) keep(finding);
		count += findings.length;
	}
	console.log(
		`${inputs} inputs with seed ${seed} in ${((performance.now() - begin) / 1000).toFixed(0)} s: ` +
			(count === 0 ? 'nothing found' : `${count} findings, kept in ${FOLDER}`)
	);
	return count === 0 ? 0 : 1;
}

/** One process for each core; the findings are in the order of their inputs whoever was first. */
async function readStretches(reader: string, count: number): Promise<Finding[]> {
	const waiting = Array.from({ length: Math.ceil(count / STRETCH) }, (_, i) => i * STRETCH);
	const findings: Finding[] = [];
	async function work(): Promise<void> {
		for (let from = waiting.shift(); from !== undefined; from = waiting.shift())
			findings.push(
				...(await watchedRun(
					{ module: MODULE, reader, seed, from, to: Math.min(count, from + STRETCH) },
					bounds
				))
			);
	}
	await Promise.all(Array.from({ length: availableParallelism() }, work));
	return findings.sort((one, other) => one.input - other.input);
}

function keep({ reader, input, faults }: Finding): void {
	console.log(`  ${reader} --seed ${seed} --input ${input}`);
	for (const fault of faults) console.log(`    ${fault.split('\n').slice(0, 4).join('\n    ')}`);
	const folder = join(FOLDER, `${reader}-${seed}-${input}`);
	mkdirSync(folder, { recursive: true });
	writeFileSync(join(folder, 'faults.txt'), `${faults.join('\n')}\n`);
	const { files } = inputMaker(
		FUZZED_READERS.find(({ name }) => name === reader)!,
		seed
	)(input);
	writeFiles(folder, files);
}

function writeFiles(folder: string, files: readonly { name: string; bytes: Uint8Array }[]): void {
	// Names are mutated too: only the harmless part of one becomes a name on this disk.
	files.forEach(({ name, bytes }, i) =>
		writeFileSync(join(folder, `${i}-${name.replace(/[^\w.-]/g, '_')}`), bytes)
	);
}

/** A single input, in this process: a debugger can look at it. */
function readOne(input: number): 0 | 1 {
	const [reader] = readers;
	if (!reader || readers.length > 1) {
		console.error('Say which --reader.');
		return 1;
	}
	const made = inputMaker(reader, seed)(input);
	const faults = faultsOf(reader, made);
	for (const fault of faults) console.log(fault);
	if (faults.length === 0) {
		console.log('nothing found');
		return 0;
	}
	const kind = kindOf(faults);
	const smallest = shrinkInput(made.files, (files) => {
		const random = inputRandom(inputSeed(seed, reader.name, input));
		return kindOf(faultsOf(reader, { files, random })) === kind;
	});
	const folder = join(FOLDER, `${reader.name}-${seed}-${input}-smallest`);
	mkdirSync(folder, { recursive: true });
	writeFiles(folder, smallest);
	for (const { name, bytes } of smallest)
		console.log(`${name}: ${JSON.stringify(Buffer.from(bytes).toString('latin1').slice(0, 2000))}`);
	return 1;
}

/** The first fault without its numbers: a smaller input has others. */
function kindOf(faults: readonly string[]): string {
	return (faults[0] ?? '').split('\n')[0]!.replace(/\d+/g, '0').slice(0, 60);
}
