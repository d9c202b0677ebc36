/**
 * How the values of one column make an aggregate.
 * rms   root of the mean of the squares: magnitudes, also percentages on a fixed base
 * mean  plain mean: quantities with a sign (powers, dc); never angles
 * max, min  extremes
 */
export type AggregationRule = 'rms' | 'mean' | 'max' | 'min';

/** Neighbouring columns of a row that follow one rule. */
export interface ColumnRun {
	rule: AggregationRule;
	count: number;
}

/** Columns that a row of these runs has. */
export function columnCountOf(runs: readonly ColumnRun[]): number {
	return runs.reduce((sum, run) => sum + run.count, 0);
}

/** Running sums of rows, column by column; nothing is allocated after construction. */
export class ColumnSums {
	/** [columns] members that held data. */
	readonly counts: Uint32Array;
	private readonly sums: Float64Array;

	constructor(private readonly runs: readonly ColumnRun[]) {
		const columns = columnCountOf(runs);
		this.counts = new Uint32Array(columns);
		this.sums = new Float64Array(columns);
		this.clear();
	}

	clear(): void {
		const { runs, sums } = this;
		this.counts.fill(0);
		let at = 0;
		for (const { rule, count } of runs) {
			sums.fill(rule === 'max' ? -Infinity : rule === 'min' ? Infinity : 0, at, at + count);
			at += count;
		}
	}

	/** row  [columns]; NaN = no data, which adds nothing */
	add(row: Float64Array): void {
		const { runs, sums, counts } = this;
		let at = 0;
		for (const { rule, count } of runs) {
			const end = at + count;
			if (rule === 'rms') addSquares(row, sums, counts, at, end);
			else if (rule === 'mean') addValues(row, sums, counts, at, end);
			else if (rule === 'max') keepGreatest(row, sums, counts, at, end);
			else keepLeast(row, sums, counts, at, end);
			at = end;
		}
	}

	/**
	 * least  members that a column needs; one with fewer is "no data"
	 * into   [columns] aggregates
	 */
	read(least: number, into: Float64Array): void {
		const { runs, sums, counts } = this;
		const needed = Math.max(1, least);
		let at = 0;
		for (const { rule, count } of runs) {
			for (const end = at + count; at < end; at++) {
				const members = counts[at]!;
				if (members < needed) into[at] = NaN;
				else if (rule === 'rms') into[at] = Math.sqrt(sums[at]! / members);
				else into[at] = rule === 'mean' ? sums[at]! / members : sums[at]!;
			}
		}
	}
}

function addSquares(
	row: Float64Array,
	sums: Float64Array,
	counts: Uint32Array,
	from: number,
	to: number
): void {
	for (let i = from; i < to; i++) {
		const value = row[i]!;
		if (value === value) {
			sums[i]! += value * value;
			counts[i]!++;
		}
	}
}

function addValues(
	row: Float64Array,
	sums: Float64Array,
	counts: Uint32Array,
	from: number,
	to: number
): void {
	for (let i = from; i < to; i++) {
		const value = row[i]!;
		if (value === value) {
			sums[i]! += value;
			counts[i]!++;
		}
	}
}

function keepGreatest(
	row: Float64Array,
	sums: Float64Array,
	counts: Uint32Array,
	from: number,
	to: number
): void {
	for (let i = from; i < to; i++) {
		const value = row[i]!;
		if (value === value) {
			if (value > sums[i]!) sums[i] = value;
			counts[i]!++;
		}
	}
}

function keepLeast(
	row: Float64Array,
	sums: Float64Array,
	counts: Uint32Array,
	from: number,
	to: number
): void {
	for (let i = from; i < to; i++) {
		const value = row[i]!;
		if (value === value) {
			if (value < sums[i]!) sums[i] = value;
			counts[i]!++;
		}
	}
}
