/**
 * A process of its own that reads inputs: fuzz-child.ts MODULE READER SEED FROM TO. It says the number of each input before
 * it is read, so that whoever watches knows which one it was when nothing more is heard.
 */
import { writeSync } from 'node:fs';
import { pathToFileURL } from 'node:url';
import type { FuzzedReader } from './fuzzed-reader';
import { faultsOf, inputMaker } from './make-input';

const [module, name, seed, from, to] = process.argv.slice(2) as [string, string, string, string, string];
const { FUZZED_READERS } = (await import(pathToFileURL(module).href)) as { FUZZED_READERS: FuzzedReader[] };
const reader = FUZZED_READERS.find((one) => one.name === name)!;
const make = inputMaker(reader, Number(seed));

/** Memory that one small file may take at most, kilobytes. */
const MOST_GROWTH_KB = 192 * 1024;

/** Written at once: a message that waits for its turn is never sent by a process that hangs. */
function say(line: unknown): void {
	const bytes = Buffer.from(`${JSON.stringify(line)}\n`);
	for (let at = 0; at < bytes.length;) at += writeSync(1, bytes, at);
}

let peak_kB = process.resourceUsage().maxRSS;
for (let input = Number(from); input < Number(to); input++) {
	say({ input });
	const faults = faultsOf(reader, make(input));
	const now_kB = process.resourceUsage().maxRSS;
	if (now_kB - peak_kB > MOST_GROWTH_KB)
		faults.push(`${Math.round((now_kB - peak_kB) / 1024)} MB of memory for one input`);
	peak_kB = now_kB;
	if (faults.length > 0) say({ input, faults });
}
