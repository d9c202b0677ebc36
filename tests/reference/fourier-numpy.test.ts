import { spawnSync } from 'node:child_process';
import { describe, expect, it } from 'vitest';
import { executeRealDft, planRealDft } from '$lib/numerics/dft/real-dft';
import { seededRandom } from '$lib/synthesis/waveform-random';

const hasNumpy = spawnSync('python3', ['-c', 'import numpy']).status === 0;

describe.skipIf(!hasNumpy)('against NumPy rfft (skipped where python3 has no numpy)', () => {
	it.each([2048, 4096, 2559, 1000])('N = %i within 1e-12 of the largest line', (length) => {
		const random = seededRandom(length);
		const samples = Float64Array.from({ length }, () => random.normal());
		const program =
			'import sys,json,numpy; x=numpy.array(json.load(sys.stdin)); X=numpy.fft.rfft(x); ' +
			'print(json.dumps(numpy.column_stack([X.real,X.imag]).ravel().tolist()))';
		const run = spawnSync('python3', ['-c', program], {
			input: JSON.stringify(Array.from(samples)),
			encoding: 'utf8',
			maxBuffer: 1e8
		});
		const other = JSON.parse(run.stdout) as number[];
		const plan = planRealDft(length);
		executeRealDft(plan, samples);
		const largest = Math.max(...other.map(Math.abs));
		expect(other).toHaveLength(2 * plan.lineCount);
		other.forEach((value, i) => {
			expect(Math.abs(plan.spectrum[i]! - value)).toBeLessThan(1e-12 * largest);
		});
	});
});
