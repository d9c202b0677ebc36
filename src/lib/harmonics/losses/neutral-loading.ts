/** What a cable of four or five cores has to be sized for when its neutral carries triplen current. */
export interface NeutralLoading {
	/** Conductor that governs. */
	governs: 'line' | 'neutral';
	/** Factor by which the governing current is divided. */
	reductionFactor: number;
	/** Current to look up in the tables of the wiring rules, A. */
	designCurrent_A: number;
	/** Three times the third harmonic of the line. */
	neutralCurrent_A: number;
}

/** Upper ends of the bands, percent of third harmonic in the line current; an end belongs to the band below it. */
const BANDS = [
	{ to_pct: 15, governs: 'line', factor: 1 },
	{ to_pct: 33, governs: 'line', factor: 0.86 },
	{ to_pct: 45, governs: 'neutral', factor: 0.86 },
	{ to_pct: Infinity, governs: 'neutral', factor: 1 }
] as const;

/**
 * Reduction factors for third-harmonic current in cables with a loaded neutral of the same section and material.
 * lineCurrent_A      rms of the line current, balanced load
 * thirdHarmonic_pct  third harmonic of the line current, percent
 * returns            null for no data
 * caution            an aid for checking a loaded neutral; the wiring rules in force where the installation stands, and the
 *                    person licensed to apply them, decide. Other triplen above about 10 % call for lower factors.
 * source             IEC 60364-5-52:2009, table E.52.1; BS 7671:2011, table 4Aa (read in public text)
 */
export function neutralLoading(lineCurrent_A: number, thirdHarmonic_pct: number): NeutralLoading | null {
	if (!(lineCurrent_A >= 0) || !(thirdHarmonic_pct >= 0)) return null;
	const band = BANDS.find(({ to_pct }) => thirdHarmonic_pct <= to_pct)!;
	const neutralCurrent_A = (3 * thirdHarmonic_pct * lineCurrent_A) / 100;
	const governing_A = band.governs === 'line' ? lineCurrent_A : neutralCurrent_A;
	return {
		governs: band.governs,
		reductionFactor: band.factor,
		designCurrent_A: governing_A / band.factor,
		neutralCurrent_A
	};
}
