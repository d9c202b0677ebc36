import { ORDER_STRIDE } from '../harmonics/intervals';
import { formatCurrent, formatOrdinal, formatPct } from '../units/format';
import type { AssessedPoint, VerdictRow } from './assessment';
import { snapshotSeries, type PhaseData } from './phase-data';

/** Greatest |dc| over the valid short intervals of a phase, in V or A; null when none was recorded. */
function greatestDc(data: PhaseData): number | null {
	const series = snapshotSeries(data) ?? data.byKind.get('10min') ?? null;
	if (series === null) return null;
	let greatest: number | null = null;
	for (let i = 0; i < series.starts_ms.length; i++) {
		const dc = series.subgroups[i * ORDER_STRIDE]!;
		if (series.flagged[i] === 1 || Number.isNaN(dc)) continue;
		if (greatest === null || dc > greatest) greatest = dc;
	}
	return greatest;
}

/** A dc share below this is left unsaid: offsets of recorders are of that size (common practice). */
const NOTABLE_DC_PCT = 0.5;

function dcNotes(point: AssessedPoint, phases: PhaseData[]): string[] {
	const full_A = point.demandCurrent_A;
	if (full_A === null || !(full_A > 0)) return [];
	return phases
		.filter((data) => data.quantity === 'current' && data.phase !== 'N')
		.flatMap((data) => {
			const dc_A = greatestDc(data);
			if (dc_A === null || (100 * dc_A) / full_A < NOTABLE_DC_PCT) return [];
			return [
				`A dc component of up to ${formatPct((100 * dc_A) / full_A)} of demand current was seen on ${data.phase}. ` +
					'It is told and not judged; check the zero of the clamp or sensor first.'
			];
		});
}

function flaggedNotes(phases: PhaseData[]): string[] {
	const most = phases.reduce((count, data) => Math.max(count, data.flaggedCount), 0);
	if (most === 0) return [];
	const [what, were] = most === 1 ? ['interval', 'was'] : ['intervals', 'were'];
	return [
		`${most} flagged ${what} (dip, swell or interruption) ${were} left out of every percentile on a phase.`
	];
}

function neutralNotes(phases: PhaseData[]): string[] {
	const neutral = phases.find((data) => data.quantity === 'current' && data.phase === 'N');
	const series =
		neutral === undefined ? null : (snapshotSeries(neutral) ?? neutral.byKind.get('10min') ?? null);
	if (series === null) return [];
	const greatest = series.rms.reduce(
		(most, rms, i) => (series.flagged[i] === 1 || !(rms > most) ? most : rms),
		-Infinity
	);
	if (!Number.isFinite(greatest)) return [];
	return [
		`The neutral carried up to ${formatCurrent(greatest)}; it is reported and not judged by these limits.`
	];
}

/** Which judged values passed through a transducer that is not known to carry them. */
function unknownNotes(rows: readonly VerdictRow[]): string[] {
	return (['voltage', 'current'] as const).flatMap((quantity) => {
		const unknown = rows.filter(
			(row) => row.quantity === quantity && row.value_pct !== null && row.uncertainty_pct === null
		);
		const orders = unknown.flatMap(({ item }) => (item.kind === 'order' ? [item.order] : []));
		const total = unknown.some(({ item }) => item.kind === 'total');
		if (unknown.length === 0) return [];
		const what = [
			...(orders.length === 0 ? [] : [`from the ${formatOrdinal(Math.min(...orders))} order on`]),
			...(total ? ['of the total'] : [])
		].join(' and ');
		return [
			`The uncertainty of the ${quantity} ${what} is not known, because it passed through a transformer that nobody has ` +
				'tested there; its verdict counts the known part only. Before money is spent on it, measure with a divider or ' +
				'sensor made for harmonics.'
		];
	});
}

/** Facts that a reader should know beside the verdict, each a sentence. */
export function notesOf(point: AssessedPoint, phases: PhaseData[], rows: readonly VerdictRow[]): string[] {
	return [...neutralNotes(phases), ...dcNotes(point, phases), ...flaggedNotes(phases), ...unknownNotes(rows)];
}
