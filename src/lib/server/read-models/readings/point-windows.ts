import { ORDER_STRIDE } from '../../../harmonics/intervals';
import type { PointSystem } from '../../../harmonics/nominal-voltages';
import type { WindowRows as ConductorWindows } from '../../../harmonics/order-phasors';
import type { SamplePowers_W } from '../../../harmonics/power/point-power';
import type { PointWindows } from '../../../harmonics/power/point-windows';
import type { Phase } from '../../../recording/phase';
import { bufferToFloat64, bufferToFloats } from '../../analysis/series-codec';
import type { AnalysisSeriesRow } from '../../db/rows';

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
 * Mean of u·i of the windows by conductor. The stored rows hold none, so P is the sum over the orders; this is the place
 * for a stored one, index by index beside the rows of `pointWindows`.
 */
export function samplePowers_W(): SamplePowers_W {
	return {};
}
