import { spawnSync } from 'node:child_process';
import { describe, expect, it } from 'vitest';
import type { BenchReport } from '../../scripts/bench/report';

// Only that the measurement runs and that both programs read the same waveform; no time is asserted.
describe('the benchmark on two seconds', () => {
	it('prints throughput, memory and stages, and both programs read the waveform that was made', () => {
		const run = spawnSync(
			process.execPath,
			['--import', 'tsx', 'scripts/bench.ts', '--duration', '2', '--repeats', '1', '--json'],
			{ encoding: 'utf8' }
		);
		expect(run.stderr).toBe('');
		const report = JSON.parse(run.stdout) as BenchReport;
		expect(report.capture).toEqual({ bytes: 614_400, duration_s: 2, channels: 8, samplingRate_Hz: 12_800 });
		const { analysis, fixedWindow, stages } = report;
		// 100.06 cycles.
		expect(analysis.windowCount).toBe(10);
		expect(analysis.peakMemory_MB).toBeGreaterThan(0);
		const shares = Object.values(stages.shares_pct);
		expect(shares.reduce((sum, share) => sum + share, 0)).toBeCloseTo(100, 6);
		for (const share of shares) expect(share).toBeGreaterThan(-0.1);
		expect(stages.shares_pct['interpolation and transform']).toBeGreaterThan(0);
		// What the capture was made of: 230 V with 3.994 % of harmonics, 3 % of them in the fifth.
		expect(analysis.rms_V / 230.183).toBeCloseTo(1, 4);
		expect(analysis.fifth_pct).toBeCloseTo(3, 2);
		if (!fixedWindow) return;
		expect(report.ratio).toBeCloseTo(fixedWindow.seconds / analysis.seconds, 12);
		expect(fixedWindow.windowCount).toBe(10);
		// Windows that are 0.06 % too long read the rms up to that much wrong.
		expect(Math.abs(fixedWindow.rms_V / analysis.rms_V - 1)).toBeLessThan(6e-4);
		expect(fixedWindow.fifth_pct).toBeCloseTo(3, 1);
	});
});
