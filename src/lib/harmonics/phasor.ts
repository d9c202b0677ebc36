/** A rotating quantity of one order: rms and cosine-convention phase. */
export interface Phasor {
	rms: number;
	phase_deg: number;
}

/** Angle brought into (−180, 180]. */
export function wrapDegrees(angle_deg: number): number {
	const turned = angle_deg - 360 * Math.floor((angle_deg + 180) / 360);
	return turned === -180 ? 180 : turned;
}

/** Sum of phasors, each times a real factor. */
export function combinePhasors(
	terms: readonly { phasor: Phasor; factor: number; turn_deg?: number }[]
): Phasor {
	let re = 0;
	let im = 0;
	for (const { phasor, factor, turn_deg = 0 } of terms) {
		const angle = ((phasor.phase_deg + turn_deg) * Math.PI) / 180;
		re += factor * phasor.rms * Math.cos(angle);
		im += factor * phasor.rms * Math.sin(angle);
	}
	return { rms: Math.hypot(re, im), phase_deg: (Math.atan2(im, re) * 180) / Math.PI };
}
