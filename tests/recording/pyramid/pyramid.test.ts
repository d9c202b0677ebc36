import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { layOutPyramid, pyramidHead, pyramidTiles } from '$lib/recording/pyramid/make-pyramid';
import {
	entryCount,
	pyramidLayout,
	REDUCTION,
	samplesPerEntry,
	TILE_ENTRIES,
	tileCount,
	tilePlace,
	tiles_bytes,
	type PyramidLayout
} from '$lib/recording/pyramid/pyramid-layout';
import { timeAxis } from '$lib/recording/pyramid/time-axis';
import type { RecordingFrame } from '$lib/recording/sample-source';

function frame(sampleCount: number, channelCount: number, timeStamps_s: Float64Array | null): RecordingFrame {
	return {
		kind: 'waveform',
		format: 'COMTRADE',
		variant: 'test',
		stationName: '',
		recorderName: '',
		nominalFrequency_Hz: 50,
		start: null,
		sampleCount,
		segments: timeStamps_s ? [] : [{ samplingRate_Hz: 1000, fromSample: 0, toSample: sampleCount }],
		timeStamps_s,
		channels: Array.from({ length: channelCount }, (_, index) => ({
			index,
			name: `c${index}`,
			phaseHint: null,
			unitAsWritten: 'V',
			baseUnit: 'V',
			quantity: 'voltage' as const,
			valuesAre: 'primary' as const,
			ratio: null,
			range: null
		})),
		statusChannelNames: [],
		remarks: []
	};
}

/** All tiles one behind the other, as they would lie in the blob after its head. */
function written(layout: PyramidLayout, channels: Float64Array[], stamps: Float64Array | null): Uint8Array {
	const pieces = [
		...pyramidTiles(layout, { samples: channels, base: 0, cover: () => undefined }, stamps)
	].map(({ bytes }) => bytes);
	const all = new Uint8Array(pieces.reduce((sum, { length }) => sum + length, 0));
	let at = 0;
	for (const piece of pieces) {
		all.set(piece, at);
		at += piece.length;
	}
	return all;
}

interface Entries {
	starts_s: Float64Array | null;
	least: Float32Array[];
	greatest: Float32Array[];
}

/** One level as the format's description says it lies, read back tile by tile. */
function readLevel(blob: Uint8Array, layout: PyramidLayout, level: number): Entries {
	const entries = entryCount(layout, level);
	const isStamped = layout.timing.kind === 'stamps';
	const out: Entries = {
		starts_s: isStamped ? new Float64Array(entries) : null,
		least: Array.from({ length: layout.channelCount }, () => new Float32Array(entries)),
		greatest: Array.from({ length: layout.channelCount }, () => new Float32Array(entries))
	};
	for (let tile = 0; tile < tileCount(layout, level); tile++) {
		const { offset_bytes, length_bytes } = tilePlace(layout, level, tile);
		const copy = blob.slice(offset_bytes, offset_bytes + length_bytes).buffer;
		const first = tile * TILE_ENTRIES;
		const count = Math.min(TILE_ENTRIES, entries - first);
		let at = 0;
		if (out.starts_s) {
			out.starts_s.set(new Float64Array(copy, 0, count), first);
			at = 8 * count;
		}
		for (let c = 0; c < layout.channelCount; c++) {
			const take = () => {
				const values = new Float32Array(copy, at, count);
				at += 4 * count;
				return values;
			};
			const least = take();
			out.least[c]!.set(least, first);
			out.greatest[c]!.set(level === 0 ? least : take(), first);
		}
		expect(at).toBe(length_bytes);
	}
	return out;
}

function extremes(samples: Float64Array, from: number, to: number): [number, number] {
	let low = Infinity;
	let high = -Infinity;
	for (let i = from; i < to; i++) {
		const value = Math.fround(samples[i]!);
		if (value < low) low = value;
		if (value > high) high = value;
	}
	return low > high ? [NaN, NaN] : [low, high];
}

/** Samples from a seed: steps, spikes, and holes from single samples to whole entries. */
function randomSamples(count: number, seed: number): Float64Array {
	let state = seed >>> 0 || 1;
	const next = () => {
		state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
		return state / 2 ** 32;
	};
	const samples = new Float64Array(count);
	let hole = 0;
	for (let i = 0; i < count; i++) {
		if (hole === 0 && next() < 0.002) hole = Math.ceil(next() * 600);
		samples[i] = hole > 0 ? NaN : 1000 * (next() - 0.5);
		if (hole > 0) hole--;
	}
	return samples;
}

function checkLevels(layout: PyramidLayout, channels: Float64Array[], stamps: Float64Array | null): void {
	const blob = written(layout, channels, stamps);
	expect(blob.length).toBe(tiles_bytes(layout));
	for (let level = layout.levelZero.kind === 'stored' ? 0 : 1; level < layout.levelCount; level++) {
		const found = readLevel(blob, layout, level);
		const each = samplesPerEntry(level);
		let wrong = 0;
		channels.forEach((samples, c) => {
			for (let k = 0; k < entryCount(layout, level); k++) {
				const [low, high] = extremes(samples, k * each, Math.min(samples.length, (k + 1) * each));
				if (!Object.is(found.least[c]![k], low) || !Object.is(found.greatest[c]![k], high)) wrong++;
			}
		});
		expect({ level, wrong }).toEqual({ level, wrong: 0 });
		if (stamps && found.starts_s)
			for (let k = 0; k < found.starts_s.length; k += 97) expect(found.starts_s[k]).toBe(stamps[k * each]);
	}
}

describe('the pyramid', () => {
	it('has the exact least and greatest of every entry at every level, whatever the length', () => {
		fc.assert(
			fc.property(
				fc.oneof(
					fc.integer({ min: 1, max: 40 }),
					fc.integer({ min: TILE_ENTRIES - 2, max: TILE_ENTRIES + 2 }),
					fc.integer({ min: 1, max: 3 * TILE_ENTRIES * REDUCTION })
				),
				fc.integer({ min: 1, max: 3 }),
				fc.boolean(),
				fc.boolean(),
				fc.integer(),
				(sampleCount, channelCount, isStored, isStamped, seed) => {
					const stamps = isStamped ? Float64Array.from({ length: sampleCount }, (_, i) => i * 0.00123) : null;
					const layout = layOutPyramid(
						frame(sampleCount, channelCount, stamps),
						isStored
							? { kind: 'stored' }
							: {
									kind: 'rows',
									sha256: 'a',
									firstByte: 0,
									layout: { format: 'int16', rowBytes: 2, offsets: [0], factors: [1], additions: [0] }
								}
					);
					const channels = Array.from({ length: channelCount }, (_, c) =>
						randomSamples(sampleCount, seed + 31 * c)
					);
					checkLevels(layout, channels, stamps);
				}
			),
			{ numRuns: 30 }
		);
	});

	it('places tiles rightly where three levels of them are written in turn', () => {
		const sampleCount = TILE_ENTRIES * REDUCTION * REDUCTION + TILE_ENTRIES * 5 + 77;
		const layout = layOutPyramid(frame(sampleCount, 1, null), { kind: 'stored' });
		expect(layout.levelCount).toBe(4);
		checkLevels(layout, [randomSamples(sampleCount, 5)], null);
	});

	it('describes itself in its head', () => {
		const layout = layOutPyramid(frame(100, 2, null), { kind: 'stored' });
		const head = pyramidHead(layout);
		expect(new TextDecoder().decode(head.subarray(0, 4))).toBe('SWPY');
		const length = new DataView(head.buffer).getUint32(4, true);
		expect(head.length).toBe(8 + length);
		expect(pyramidLayout.parse(JSON.parse(new TextDecoder().decode(head.subarray(8))))).toEqual(layout);
	});
});

describe('the time axis', () => {
	it('counts gaps and several rates', () => {
		const axis = timeAxis(
			{
				kind: 'rates',
				segments: [
					{ samplingRate_Hz: 1000, fromSample: 0, toSample: 1000, start_s: 0 },
					{ samplingRate_Hz: 100, fromSample: 1000, toSample: 1100, start_s: 86_401 }
				]
			},
			1100
		);
		expect(axis.timeOf(500)).toBe(0.5);
		expect(axis.timeOf(1000)).toBe(86_401);
		expect(axis.timeOf(1050)).toBe(86_401.5);
		expect(axis.indexAt(0.25)).toBe(250);
		expect(axis.indexAt(40_000)).toBe(1000);
		expect(axis.indexAt(86_401.25)).toBe(1025);
		expect(axis.indexAt(1e6)).toBe(1100);
	});

	it('finds its way by anchors where samples have stamps of their own', () => {
		const stamps = Float64Array.from({ length: 10_000 }, (_, i) => (i / 1000) ** 2);
		const { timing } = layOutPyramid(frame(10_000, 1, stamps), { kind: 'stored' });
		const axis = timeAxis(timing, 10_000);
		for (const i of [0, 17, 999, 5000, 9998]) {
			expect(Math.abs(axis.timeOf(i) - stamps[i]!)).toBeLessThan(1e-4);
			expect(Math.abs(axis.indexAt(stamps[i]!) - i)).toBeLessThan(3);
		}
	});
});
