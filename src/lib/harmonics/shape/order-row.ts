import { ORDER_STRIDE } from '../intervals';
import type { WindowRows } from '../order-phasors';

/** One wave by its orders: what one window of a channel holds, or a mean over windows. */
export interface OrderRow {
	/** Mean value with its sign. */
	dc: number;
	/** [orders] rms of each order, index = order; index 0 is not read. NaN = no data. */
	components: Float64Array;
	/** [orders] degrees, cosine convention, as in ChannelAnalysis: φ_h − h·φ_ref,1. */
	phases_deg: Float64Array;
}

/** The row of one window; views, not copies. */
export function orderRowOf(rows: WindowRows, window: number): OrderRow {
	const at = window * ORDER_STRIDE;
	return {
		dc: rows.dc[window]!,
		components: rows.components.subarray(at, at + ORDER_STRIDE),
		phases_deg: rows.phases_deg.subarray(at, at + ORDER_STRIDE)
	};
}
