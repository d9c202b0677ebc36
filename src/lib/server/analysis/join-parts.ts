import type { AnalysisSeriesRow } from '../db/rows';

/** Columns that hold one value, or one row of values, per interval. */
export const INTERVAL_COLUMNS = [
	'starts_ms',
	'lengths_s',
	'rms',
	'frequency_hz',
	'subgroups',
	'flagged',
	'components',
	'interharmonic_subgroups',
	'phases_deg',
	'dc',
	'peak',
	'harmonic_groups',
	'interharmonic_groups'
] as const;

type Column = (typeof INTERVAL_COLUMNS)[number];
type PartRow = Pick<AnalysisSeriesRow, 'interval_count'> & Partial<Pick<AnalysisSeriesRow, Column>>;

/** Parts of one series, in order of time, as one row. Columns that were not read stay away. */
export function joinParts<Row extends PartRow>(parts: readonly Row[]): Row {
	const first = parts[0];
	if (first === undefined) throw new Error('there is no part to join');
	if (parts.length === 1) return first;
	const joined: Row = { ...first, interval_count: parts.reduce((sum, part) => sum + part.interval_count, 0) };
	for (const column of INTERVAL_COLUMNS) {
		const bytes = parts.map((part) => part[column]);
		if (bytes.every((one) => one !== null && one !== undefined))
			(joined as PartRow)[column] = Buffer.concat(bytes as Buffer[]);
	}
	return joined;
}
