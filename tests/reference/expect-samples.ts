import { expect } from 'vitest';
import type { RecordingChannel } from '$lib/recording/recording';
import type { ExpectedSamples } from './sample-files';

/** Expected figures are in the unit of the file. */
const SCALES: Record<string, number> = { kV: 1000, kA: 1000, mV: 1e-3, mA: 1e-3 };

/**
 * Compares a channel with figures printed to seven digits: each agrees within 1e-6 of the largest sample,
 * which covers that rounding (5e-7) and the order of summation of the mean.
 */
export function expectSamples(channel: RecordingChannel, unit: string, expected: ExpectedSamples): void {
	const scale = SCALES[unit] ?? 1;
	const present = channel.samples.filter((value) => !Number.isNaN(value));
	expect(channel.samples.length).toBe(expected.n + (expected.n === present.length ? expected.missing : 0));
	expect(channel.samples.length - present.length).toBe(expected.missing);
	let sum = 0;
	let squares = 0;
	for (const value of present) {
		sum += value;
		squares += value * value;
	}
	const largest = scale * Math.max(Math.abs(expected.min), Math.abs(expected.max));
	const near = (ours: number, theirs: number) =>
		expect(Math.abs(ours - theirs * scale)).toBeLessThanOrEqual(1e-6 * largest);
	near(sum / present.length, expected.mean);
	near(Math.sqrt(squares / present.length), expected.rms);
	near(Math.min(...chunkEnds(present, Math.min)), expected.min);
	near(Math.max(...chunkEnds(present, Math.max)), expected.max);
	const firsts = expected.n === channel.samples.length ? [...channel.samples.slice(0, 3)] : null;
	for (const [index, value] of (firsts ?? []).entries()) {
		const theirs = expected.first3[index];
		if (!Number.isNaN(value) && typeof theirs === 'number') near(value, theirs);
	}
	near(channel.samples[channel.samples.length - 1] as number, expected.last);
}

/** Extremes of stretches short enough to be spread as arguments. */
function chunkEnds(values: Float64Array, pick: (...values: number[]) => number): number[] {
	const ends: number[] = [];
	for (let at = 0; at < values.length; at += 10_000) ends.push(pick(...values.subarray(at, at + 10_000)));
	return ends;
}
