import { createScriptKernels } from '../src/lib/numerics/kernels/script-kernels';
import type { KernelShape, RowLayout, SignalKernels } from '../src/lib/numerics/kernels/signal-kernels';
import { createWasmKernels } from '../src/lib/numerics/kernels/wasm-kernels';
import { designKaiserKernel, designTaperKernel } from '../src/lib/numerics/resample/kaiser-kernel';

// Run with: node --import tsx scripts/bench-kernels.ts [channels]
// Both forms take turns, so that a busy machine slows both alike. The ratio is that of the medians.
const CHANNELS = Number(process.argv[2] ?? 8);
const WARM_ROUNDS = 20;
const ROUNDS = 61;
const CALLS_PER_ROUND = 8;
/** Ten cycles of 50 Hz at 12.8 kS/s. */
const ROWS = 2560;
const ROW_BYTES = 8 + 4 * CHANNELS;

/** Bands that window-spectrum.ts comes to at this rate. */
const PASSBAND = 51 * (50 / 12800) * 1.04;
const STOPBAND = (2048 * 50) / 12800 / 10.4 - PASSBAND;
const shape: KernelShape = {
	channelCount: CHANNELS,
	capacity: 8192,
	points: 2048,
	lineCount: 511,
	kernel: designKaiserKernel(PASSBAND, STOPBAND, 120),
	rawCapacity: ROWS * ROW_BYTES
};
const equalised: KernelShape = { ...shape, kernel: designTaperKernel(PASSBAND, STOPBAND, 120)! };
const valueBytes = { int16: 2, int32: 4, float32: 4 };

function rowLayout(format: keyof typeof valueBytes): RowLayout {
	const each = <T>(of: (c: number) => T) => Array.from({ length: CHANNELS }, (_, c) => of(c));
	return {
		format,
		rowBytes: ROW_BYTES,
		offsets: each((c) => 8 + valueBytes[format] * c),
		factors: each((c) => 0.01 + c),
		additions: each((c) => c)
	};
}

function fill(kernels: SignalKernels): void {
	kernels.samples.forEach((values, c) => {
		for (let i = 0; i < values.length; i++)
			values[i] = Math.cos((2 * Math.PI * i) / 255.7 + c) + 0.01 * Math.cos(i);
	});
	for (let i = 0; i < kernels.raw.length; i++) kernels.raw[i] = (i * 7) % 64;
}

const TRANSFORM = 'transformWindow';
const layouts = { int16: rowLayout('int16'), int32: rowLayout('int32'), float32: rowLayout('float32') };
const tasks: Record<string, (kernels: SignalKernels) => void> = {
	'decodeRows int16': (kernels) => kernels.decodeRows(layouts.int16, ROWS, 0),
	'decodeRows int32': (kernels) => kernels.decodeRows(layouts.int32, ROWS, 0),
	'decodeRows float32': (kernels) => kernels.decodeRows(layouts.float32, ROWS, 0),
	slide: (kernels) => kernels.slide(2560, 2560),
	[TRANSFORM]: (kernels) => kernels.transformWindow(kernels.guard + 0.37, 1.2501 + 1e-9 * Math.random()),
	'stretch, every channel': (kernels) => {
		for (let c = 0; c < CHANNELS; c++) kernels.stretch(c, 11, 11 + ROWS);
	}
};

function time_us(task: (kernels: SignalKernels) => void, kernels: SignalKernels): number {
	const begin = process.hrtime.bigint();
	for (let call = 0; call < CALLS_PER_ROUND; call++) task(kernels);
	return Number(process.hrtime.bigint() - begin) / 1000 / CALLS_PER_ROUND;
}

const begin = performance.now();
const wasm = createWasmKernels(shape);
const made_ms = performance.now() - begin;
const script = createScriptKernels(shape);
[wasm, script].forEach(fill);
console.log(
	`${CHANNELS} channels, ${ROWS} rows, ${shape.points} points, ${shape.lineCount} lines, ${2 * wasm.guard} taps; made in ${made_ms.toFixed(1)} ms`
);
const row = (name: string, ...cells: string[]) =>
	console.log(name.padEnd(30) + cells.map((cell) => cell.padStart(14)).join(''));
row('µs per call', 'script lowest', 'wasm lowest', 'script median', 'wasm median', 'ratio');

function compare(
	name: string,
	task: (kernels: SignalKernels) => void,
	plainKernels: SignalKernels,
	fastKernels: SignalKernels
): void {
	const plain: number[] = [];
	const fast: number[] = [];
	for (let round = 0; round < WARM_ROUNDS + ROUNDS; round++) {
		const plainTime = time_us(task, plainKernels);
		const fastTime = time_us(task, fastKernels);
		if (round < WARM_ROUNDS) continue;
		plain.push(plainTime);
		fast.push(fastTime);
	}
	[plain, fast].forEach((times) => times.sort((a, b) => a - b));
	const middle = ROUNDS >> 1;
	const cells = [plain[0]!, fast[0]!, plain[middle]!, fast[middle]!, plain[middle]! / fast[middle]!];
	row(name, ...cells.map((cell) => cell.toFixed(1)));
}

for (const [name, task] of Object.entries(tasks)) compare(name, task, script, wasm);
const bare = [createScriptKernels(equalised), createWasmKernels(equalised)] as const;
bare.forEach(fill);
compare(`the same, ${2 * bare[0].guard} taps equalised`, tasks[TRANSFORM]!, ...bare);

let worst = 0;
let largest = 0;
for (const kernels of [wasm, script]) kernels.transformWindow(kernels.guard + 0.37, 1.2501);
wasm.spectra.forEach((lines, c) =>
	lines.forEach((value, i) => {
		worst = Math.max(worst, Math.abs(value - script.spectra[c]![i]!));
		largest = Math.max(largest, Math.abs(value));
	})
);
console.log(`largest difference of spectra: ${(worst / largest).toExponential(1)} of the largest line`);
