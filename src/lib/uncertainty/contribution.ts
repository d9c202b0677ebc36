/** Where an error can come from, along the measuring chain. */
export const CONTRIBUTION_SOURCES = [
	'instrument-class',
	'instrument-certificate',
	'transformer-ratio',
	'transformer-response',
	'transformer-beyond-reach',
	'sensor-ratio',
	'sensor-response',
	'sensor-beyond-reach',
	'basis',
	'quantisation',
	'window-noise',
	'missing-intervals',
	'instrument-angle',
	'voltage-transformer-angle',
	'current-transformer-angle',
	'voltage-sensor-angle',
	'current-sensor-angle'
] as const;
export type ContributionSource = (typeof CONTRIBUTION_SOURCES)[number];

export type Distribution = 'normal' | 'rectangular' | 'triangular';

/** One line of a budget: an input with its spread, and what it does to the figure (JCGM 100:2008, 4.3 and 5.1). */
export interface Contribution {
	source: ContributionSource;
	/** A: from the spread of repeated readings; B: from anything else. */
	type: 'A' | 'B';
	distribution: Distribution;
	/** Half-width of a bound, expanded uncertainty of a certificate, or standard deviation; in `statedIn`. */
	stated: number;
	statedIn: 'percent of reading' | 'unit of the figure';
	/** Standard uncertainty of the input = stated ÷ divisor. */
	divisor: number;
	/** Change of the figure for one of the input. */
	sensitivity: number;
	/** Standard uncertainty of the figure from this input alone, unit of the figure, ≥ 0. */
	u: number;
	/** Of a type A estimate; null = taken as known without limit (JCGM 100:2008, G.4.3). */
	degreesOfFreedom: number | null;
}

/** Half-width ÷ divisor = standard deviation (JCGM 100:2008, 4.3.7 and 4.3.9). */
const BOUND_DIVISOR = { rectangular: Math.sqrt(3), triangular: Math.sqrt(6) };

interface Stated {
	source: ContributionSource;
	stated: number;
	statedIn: Contribution['statedIn'];
	/** 1 for what is stated in the unit of the figure; value/100 for percent of reading. */
	sensitivity: number;
}

function line(
	{ source, stated, statedIn, sensitivity }: Stated,
	distribution: Distribution,
	divisor: number,
	type: Contribution['type'],
	degreesOfFreedom: number | null
): Contribution {
	const u = Math.abs((sensitivity * stated) / divisor);
	return { source, type, distribution, stated, statedIn, divisor, sensitivity, u, degreesOfFreedom };
}

/** An error of which only a bound ±stated is known. */
export function bounded(
	input: Stated,
	distribution: 'rectangular' | 'triangular' = 'rectangular'
): Contribution {
	return line(input, distribution, BOUND_DIVISOR[distribution], 'B', null);
}

/** An expanded uncertainty with its coverage factor, as a certificate states it (JCGM 100:2008, 4.3.3). */
export function certified(input: Stated, coverageFactor: number): Contribution {
	return line(input, 'normal', coverageFactor, 'B', null);
}

/** A standard uncertainty that was computed, not observed: noise of known size. */
export function computed(input: Stated): Contribution {
	return line(input, 'normal', 1, 'B', null);
}

/** A standard deviation observed in the readings themselves (JCGM 100:2008, 4.2). */
export function observed(input: Stated, degreesOfFreedom: number): Contribution {
	return line(input, 'normal', 1, 'A', degreesOfFreedom);
}
