import type { Phase } from '$lib/recording/phase';

type Figure = number | null;

export interface LossPhaseFigures {
	phase: Phase;
	label: string;
	rms_A: Figure;
	kFactor: Figure;
	eddyLossFactor: Figure;
	strayLossFactor: Figure;
	permissible_pu: Figure;
	kRating: number | null;
	loadFactorK: Figure;
	triplen_pctOfFundamental: Figure;
	thirdHarmonic_pctOfRms: Figure;
	it_A: Figure;
	tif: Figure;
	neutral: {
		governs: 'line' | 'neutral';
		reductionFactor: number;
		designCurrent_A: Figure;
		neutralCurrent_A: Figure;
	} | null;
}

export interface LossFigures {
	highestOrder: number;
	ratedCurrent_A: number | null;
	ratedFrom: string | null;
	eddyLoss_pct: number;
	phases: LossPhaseFigures[];
	hasNeutral: boolean;
	residualIt_A: Figure;
}
