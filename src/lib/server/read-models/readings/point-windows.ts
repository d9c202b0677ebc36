import { ORDER_STRIDE } from '../../../harmonics/intervals';
import type { PointSystem } from '../../../harmonics/nominal-voltages';
import type { WindowRows as ConductorWindows } from '../../../harmonics/order-phasors';
import type { SamplePowers_W } from '../../../harmonics/power/point-power';
import type { PointWindows } from '../../../harmonics/power/point-windows';
import { LINE_PHASES, type Phase } from '../../../recording/phase';
import { bufferToFloat64, bufferToFloats } from '../../analysis/series-codec';
import type { Db } from '../../db/database';
import type { AnalysisSeriesRow } from '../../db/rows';
import { analysesRepository } from '../../repositories/analyses.repository';
import type { Scope } from '../../repositories/scope';

export interface PointContext {
	system: PointSystem;
	highestOrder: number;
	/** Name of a conductor or pair at this point. */
	label: (phase: Phase) => string;
}

/** The stored windows of all channels as the powers and sequences of a point need them. */
export function pointWindows(rows: readonly AnalysisSeriesRow[], context: PointContext): PointWindows {
	const point: PointWindows = {
		system: context.system,
		highestOrder: context.highestOrder,
		voltages: {},
		currents: {}
	};
	for (const row of rows)
		(row.quantity === 'voltage' ? point.voltages : point.currents)[row.phase] ??= conductorWindows(row);
	return point;
}

function conductorWindows(row: AnalysisSeriesRow): ConductorWindows {
	const { rms, dc, components, phases_deg } = row;
	const length = row.interval_count * ORDER_STRIDE;
	if (!components || !phases_deg || !dc)
		throw new Error('phasors are asked of a series that is not made of windows');
	return {
		rms: bufferToFloat64(rms),
		dc: bufferToFloat64(dc),
		components: bufferToFloats(components, length),
		phases_deg: bufferToFloats(phases_deg, length)
	};
}

/**
 * Mean of u·i of the windows in `rows`, by conductor, from the figures that the analysis keeps over time. Conductors of
 * which none is kept are left out: their P is the sum over the orders.
 */
export async function samplePowers_W(
	db: Db,
	scope: Scope,
	analysisId: string,
	rows: readonly AnalysisSeriesRow[]
): Promise<SamplePowers_W> {
	const first = rows[0];
	if (!first) return {};
	const starts_ms = bufferToFloat64(first.starts_ms);
	const scalars = await analysesRepository(db, scope).scalarsOf(analysisId, 'window', 'active-power');
	const powers: SamplePowers_W = {};
	for (const phase of LINE_PHASES) {
		const byStart = new Map<number, number>();
		for (const scalar of scalars.filter((one) => one.phase === phase)) {
			const values = bufferToFloat64(scalar.values);
			bufferToFloat64(scalar.starts_ms).forEach((start, i) => byStart.set(start, values[i]!));
		}
		if (byStart.size > 0) powers[phase] = starts_ms.map((start) => byStart.get(start) ?? NaN);
	}
	return powers;
}
