import type { HarmonicTruth } from '../../src/lib/synthesis/waveform';

/**
 * Spectra of the demo's loads, percent of the fundamental. Invented, but shaped as such loads are (common practice):
 * six-pulse converters give 6n ± 1, single-phase rectifiers the triplens, and even orders stay small.
 */
type Spectrum = readonly (readonly [order: number, pct: number, phase_deg: number])[];

function truths(spectrum: Spectrum): HarmonicTruth[] {
	return spectrum.map(([order, magnitude_pctOfFundamental, phase_deg]) => ({
		order,
		magnitude_pctOfFundamental,
		phase_deg
	}));
}

/** Order-dependent remainder on every order, so that no order is exactly nothing. */
function withFloor(spectrum: Spectrum, floor_pct: number): HarmonicTruth[] {
	const given = new Set(spectrum.map(([order]) => order));
	const rest: (readonly [number, number, number])[] = [];
	for (let order = 2; order <= 50; order++)
		if (!given.has(order))
			rest.push([order, (floor_pct * (order % 2 === 0 ? 0.6 : 1)) / Math.sqrt(order), (order * 47) % 360]);
	return truths([...spectrum, ...rest].sort((a, b) => a[0] - b[0]));
}

/** Compressor drives with 3 % line reactors, seen at the service entrance beside lighting and heaters. */
export const COMPRESSOR_CURRENT = withFloor(
	[
		[3, 0.9, 40],
		[5, 10.4, 172],
		[7, 6.0, 12],
		[9, 0.25, 80],
		[11, 3.85, 168],
		[13, 2.4, 20],
		[15, 0.12, 60],
		[17, 1.75, 160],
		[19, 1.3, 30],
		[23, 0.95, 150],
		[25, 0.75, 35],
		[29, 0.55, 140],
		[31, 0.42, 45],
		[35, 0.33, 130],
		[37, 0.25, 50],
		[41, 0.2, 120],
		[43, 0.17, 60],
		[47, 0.13, 110],
		[49, 0.11, 70]
	],
	0.08
);
export const COMPRESSOR_VOLTAGE = withFloor(
	[
		[3, 0.35, 30],
		[5, 2.6, 95],
		[7, 1.45, 280],
		[11, 0.95, 85],
		[13, 0.62, 290],
		[17, 0.45, 80],
		[19, 0.35, 300],
		[23, 0.3, 75],
		[25, 0.22, 310]
	],
	0.03
);

/** Compressor panel inside the plant, behind its own feeder: the drives alone. */
export const DRIVE_PANEL_CURRENT = withFloor(
	[
		[5, 34, 175],
		[7, 13, 8],
		[11, 8.1, 170],
		[13, 4.6, 18],
		[17, 3.7, 162],
		[19, 2.4, 28],
		[23, 1.9, 152],
		[25, 1.4, 33],
		[29, 1.1, 142],
		[31, 0.9, 43],
		[35, 0.7, 132],
		[37, 0.6, 52]
	],
	0.1
);

/** Print works: presses on twelve-pulse drives behind a delta-wye pair. */
export const PRESS_CURRENT = withFloor(
	[
		[3, 0.4, 20],
		[5, 1.5, 175],
		[7, 1.0, 10],
		[11, 2.1, 170],
		[13, 1.4, 15],
		[17, 0.3, 160],
		[19, 0.25, 30],
		[23, 0.45, 150],
		[25, 0.35, 35],
		[35, 0.12, 130],
		[37, 0.1, 55]
	],
	0.03
);
export const PRESS_VOLTAGE = withFloor(
	[
		[3, 0.2, 30],
		[5, 0.75, 100],
		[7, 0.5, 280],
		[11, 0.4, 90],
		[13, 0.28, 290],
		[23, 0.1, 75]
	],
	0.015
);
/** The same presses before the drives were rebuilt: six-pulse. */
export const PRESS_CURRENT_BEFORE = withFloor(
	[
		[3, 0.5, 20],
		[5, 11.9, 175],
		[7, 6.2, 10],
		[11, 3.6, 170],
		[13, 1.5, 15],
		[17, 1.1, 160],
		[19, 0.8, 30],
		[23, 0.55, 150],
		[25, 0.4, 35]
	],
	0.03
);

/** Hospital at 11 kV with a capacitor bank that resonates near the 11th. */
export const HOSPITAL_VOLTAGE = withFloor(
	[
		[3, 0.4, 10],
		[5, 1.9, 110],
		[7, 1.3, 275],
		[11, 3.62, 140],
		[13, 1.15, 310],
		[17, 0.3, 80],
		[19, 0.2, 300],
		[23, 0.15, 70]
	],
	0.02
);
export const HOSPITAL_CURRENT = withFloor(
	[
		[3, 0.6, 20],
		[5, 4.1, 170],
		[7, 2.6, 10],
		[11, 6.8, 95],
		[13, 1.8, 200],
		[17, 0.6, 160],
		[19, 0.4, 30]
	],
	0.04
);

/** Means of the data hall's week, before its daily course: rectifier front ends, much third and its multiples. */
export const DATA_HALL_VOLTAGE = withFloor(
	[
		[3, 1.9, 0],
		[5, 5.86, 0],
		[7, 2.6, 0],
		[9, 0.62, 0],
		[11, 1.1, 0],
		[13, 0.8, 0],
		[15, 0.24, 0],
		[17, 0.5, 0],
		[19, 0.4, 0],
		[21, 0.12, 0],
		[23, 0.35, 0],
		[25, 0.3, 0]
	],
	0.02
);
export const DATA_HALL_CURRENT = withFloor(
	[
		[3, 13.5, 0],
		[5, 7.2, 0],
		[7, 4.4, 0],
		[9, 3.9, 0],
		[11, 2.1, 0],
		[13, 1.5, 0],
		[15, 1.2, 0],
		[17, 0.8, 0],
		[19, 0.6, 0],
		[21, 0.5, 0],
		[23, 0.4, 0],
		[25, 0.3, 0]
	],
	0.05
);
