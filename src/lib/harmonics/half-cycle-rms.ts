/** Urms(1/2) of one voltage: one-cycle rms values, each starting half a cycle after the one before. */
export interface HalfCycleRms {
	/** [n] sample number of the start of each one-cycle span. */
	starts: Float64Array;
	/** [n] samples in each one-cycle span. */
	lengths: Float64Array;
	/** [n] rms, unit of the samples; NaN where samples are missing. */
	rms: Float64Array;
}

/**
 * Rms over one cycle from each zero crossing of the channel's own fundamental, refreshed every half cycle.
 * samples    any unit
 * windows    start (sample number), length (samples) and absolute fundamental phase (degrees, at the start) of each
 *            window; a window with phase NaN contributes no values
 * cycles     cycles per window
 * source     IEC 61000-4-30:2015, 3.25 and 5.2.1 (from memory); the crossing is that of the fundamental, so notches and
 *            ripple around zero do not disturb it
 */
export function halfCycleRms(
	samples: Float64Array,
	windows: readonly { start: number; length: number; phase_deg: number }[],
	cycles: number
): HalfCycleRms {
	const starts: number[] = [];
	const lengths: number[] = [];
	const values: number[] = [];
	const squares = cumulativeSquares(samples);
	for (const window of windows) {
		if (Number.isNaN(window.phase_deg)) continue;
		const cycle = window.length / cycles;
		// cos(2πx/cycle + φ) crosses zero upwards where its argument is −90°; every half cycle from there is a crossing.
		const first = ((((-90 - window.phase_deg) / 180) % 1) + 1) % 1;
		for (let half = 0; half < 2 * cycles; half++) {
			const start = window.start + ((first + half) * cycle) / 2;
			const end = start + cycle;
			starts.push(start);
			lengths.push(cycle);
			// The last two values of a window reach into the next, where samples may be missing.
			const unusable =
				end > samples.length - 1 || (end > window.start + window.length && holdsMissing(samples, start, end));
			const mean = (integralTo(squares, end) - integralTo(squares, start)) / cycle;
			values.push(unusable ? NaN : Math.sqrt(Math.max(0, mean)));
		}
	}
	return {
		starts: Float64Array.from(starts),
		lengths: Float64Array.from(lengths),
		rms: Float64Array.from(values)
	};
}

function holdsMissing(samples: Float64Array, from: number, to: number): boolean {
	for (let i = Math.floor(from); i <= Math.ceil(to); i++) if (Number.isNaN(samples[i])) return true;
	return false;
}

/** [n] integral of the squares up to sample i, by trapezoids; stretches beside missing samples add nothing. */
function cumulativeSquares(samples: Float64Array): Float64Array {
	const integral = new Float64Array(samples.length);
	let before = samples[0]! * samples[0]!;
	for (let i = 1; i < samples.length; i++) {
		const square = samples[i]! * samples[i]!;
		const area = (before + square) / 2;
		integral[i] = integral[i - 1]! + (Number.isNaN(area) ? 0 : area);
		before = square;
	}
	return integral;
}

function integralTo(integral: Float64Array, position: number): number {
	const whole = Math.floor(position);
	const fraction = position - whole;
	const lower = integral[whole]!;
	return fraction > 0 ? lower + fraction * (integral[whole + 1]! - lower) : lower;
}
