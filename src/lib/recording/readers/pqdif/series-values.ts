import type { Body, VectorPlace } from './elements';
import { numberAt } from './elements';
import { PHYSICAL_TYPE, STORAGE, TYPE_BYTES } from './pqdif-ids';

/** Values of a count that only increments give: more than this is a fault or an attack. */
const MOST_EXPANDED = 1 << 24;

/** How a series is stored: method by its definition, scale and offset by its instance. */
export interface StoredSeries {
	vector: VectorPlace;
	storage: number;
	scale: number;
	offset: number;
}

/** The times of a series' values. */
export type SeriesTimes =
	/** Runs of evenly spaced times, from 0 on. */
	| { kind: 'even'; runs: { count: number; step: number }[]; count: number }
	| { kind: 'listed'; values: Float64Array; count: number };

/** The physical values of a series; null where it is stored in a way that gives none. */
export function seriesValues(body: Body, series: StoredSeries): Float64Array | null {
	const { vector, storage } = series;
	const raw = storage & STORAGE.increment ? expand(body, vector) : plainValues(body, vector);
	if (raw === null || !isScaled(storage)) return raw;
	const { scale, offset } = series;
	for (let at = 0; at < raw.length; at++) raw[at] = raw[at]! * scale + offset;
	return raw;
}

/** Times without writing every one of them out where they are even. */
export function seriesTimes(body: Body, series: StoredSeries): SeriesTimes | null {
	const { vector, storage, scale } = series;
	if (!(storage & STORAGE.increment)) {
		const values = seriesValues(body, series);
		return values === null ? null : { kind: 'listed', values, count: values.length };
	}
	const runs = incrementRuns(body, vector);
	if (runs === null) return null;
	const factor = isScaled(storage) ? scale : 1;
	const scaled = runs.map(({ count, step }) => ({ count, step: step * factor }));
	return { kind: 'even', runs: scaled, count: scaled.reduce((sum, { count }) => sum + count, 0) };
}

/** The standard's own formula gives a scale to scaled series only; increments may carry one as well. */
function isScaled(storage: number): boolean {
	return (storage & (STORAGE.scaled | STORAGE.increment)) !== 0;
}

export function plainValues(body: Body, { type, count, at }: VectorPlace): Float64Array | null {
	if (type === PHYSICAL_TYPE.guid) return null;
	const bytes = TYPE_BYTES[type]!;
	const values = new Float64Array(count);
	const { view } = body;
	// The two types of nearly all samples, without a switch for each value.
	if (type === PHYSICAL_TYPE.int2)
		for (let i = 0; i < count; i++) values[i] = view.getInt16(at + 2 * i, true);
	else if (type === PHYSICAL_TYPE.real4)
		for (let i = 0; i < count; i++) values[i] = view.getFloat32(at + 4 * i, true);
	else for (let i = 0; i < count; i++) values[i] = numberAt(view, type, at + bytes * i);
	for (let i = 0; i < count; i++) if (!Number.isFinite(values[i]!)) values[i] = NaN;
	return values;
}

/** "Number of runs, count, step, count, step …"; null where the numbers do not make that up. */
function incrementRuns(body: Body, vector: VectorPlace): { count: number; step: number }[] | null {
	if (vector.type === PHYSICAL_TYPE.guid || vector.count < 1) return null;
	const bytes = TYPE_BYTES[vector.type]!;
	const valueAt = (index: number) => numberAt(body.view, vector.type, vector.at + index * bytes);
	const runCount = valueAt(0);
	if (!Number.isInteger(runCount) || runCount < 0 || 1 + 2 * runCount > vector.count) return null;
	const runs = Array.from({ length: runCount }, (_, run) => ({
		count: valueAt(1 + 2 * run),
		step: valueAt(2 + 2 * run)
	}));
	const isSound = runs.every(
		({ count, step }) => Number.isInteger(count) && count >= 0 && count < 2 ** 31 && Number.isFinite(step)
	);
	return isSound ? runs : null;
}

/** Increments written out as their running sum, which begins with 0. */
function expand(body: Body, vector: VectorPlace): Float64Array | null {
	const runs = incrementRuns(body, vector);
	const count = runs?.reduce((sum, run) => sum + run.count, 0) ?? 0;
	if (runs === null || count > MOST_EXPANDED) return null;
	const values = new Float64Array(count);
	let sum = 0;
	let at = 0;
	for (const run of runs) {
		for (let i = 0; i < run.count; i++) {
			values[at++] = sum;
			sum += run.step;
		}
	}
	return values;
}
