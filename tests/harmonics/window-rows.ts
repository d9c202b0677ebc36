import { ORDER_STRIDE } from '$lib/harmonics/intervals';
import type { WindowRows } from '$lib/harmonics/order-phasors';

/** [rms, degrees] by order; order 0 is the mean value with its sign. Orders left out are zero. */
export type Spectrum = Record<number, readonly [number, number]>;

/** Rows of one window per spectrum; `extra_rms` is what lies between the orders. */
export function windowRows(spectra: readonly Spectrum[], extra_rms = 0): WindowRows {
	const rows: WindowRows = {
		rms: new Float64Array(spectra.length),
		dc: new Float64Array(spectra.length),
		components: new Float64Array(spectra.length * ORDER_STRIDE),
		phases_deg: new Float64Array(spectra.length * ORDER_STRIDE)
	};
	spectra.forEach((spectrum, w) => {
		let square = extra_rms ** 2;
		for (const [key, [rms, phase_deg]] of Object.entries(spectrum)) {
			const order = Number(key);
			square += rms ** 2;
			if (order === 0) rows.dc[w] = rms;
			rows.components[w * ORDER_STRIDE + order] = Math.abs(rms);
			rows.phases_deg[w * ORDER_STRIDE + order] = phase_deg;
		}
		rows.rms[w] = Math.sqrt(square);
	});
	return rows;
}

/** The same wave a third of a cycle later for each further conductor. */
export function shifted(spectrum: Spectrum, thirds: number): Spectrum {
	return Object.fromEntries(
		Object.entries(spectrum).map(([order, [rms, phase_deg]]) => [
			order,
			[rms, phase_deg - 120 * thirds * Number(order)]
		])
	);
}
