import { familyContent } from '../../../harmonics/distortion';
import { ORDER_STRIDE } from '../../../harmonics/intervals';
import {
	eddyLossFactor,
	kFactor,
	kRatingFor,
	loadFactorK,
	permissibleCurrent_pu,
	strayLossFactor
} from '../../../harmonics/losses/loss-factors';
import { neutralLoading } from '../../../harmonics/losses/neutral-loading';
import { telephoneInfluenceFactor, telephoneProduct } from '../../../harmonics/telephone/telephone-influence';
import type { Phase } from '../../../recording/phase';
import { bufferToFloats } from '../../analysis/series-codec';
import { ordersOver, rmsOver } from '../../analysis/window-values';
import type { AnalysisSeriesRow } from '../../db/rows';
import { figure, type Figure } from './reading-figure';
import type { WindowRows } from './window-rows';

/** One line current over the chosen windows. */
export interface LossReading {
	phase: Phase;
	label: string;
	rms_A: Figure;
	/** UL K-factor on the rated current; null where no rated current is known. */
	kFactor: Figure;
	/** The same on the current that flows: F_HL. */
	eddyLossFactor: Figure;
	strayLossFactor: Figure;
	/** Permissible share of the rated current of a dry-type transformer, per unit. */
	permissible_pu: Figure;
	/** Next marked K rating for F_HL; null above the greatest. */
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

export interface LossReadings {
	kind: 'losses';
	highestOrder: number;
	/** What K refers to. */
	ratedCurrent_A: number | null;
	ratedFrom: string | null;
	eddyLoss_pct: number;
	phases: LossReading[];
	/** Whether a neutral is there to be loaded. */
	hasNeutral: boolean;
	residualIt_A: Figure;
}

/** Rated eddy loss assumed for a dry-type transformer, share of the I²R loss (common practice where no test report is at hand). */
const ASSUMED_EDDY_LOSS = 0.15;
const ASSUMED_EDDY_SHARE = 0.1;

export interface LossContext {
	highestOrder: number;
	frequency_Hz: number;
	label: (phase: Phase) => string;
	system: string;
	rated: { current_A: number; from: string } | null;
}

/** What the harmonics of the currents mean for transformers, cables and telephone lines. */
export function lossReadings({ rows, windows }: WindowRows, context: LossContext): LossReadings {
	const { highestOrder, rated } = context;
	const lines = rows.filter((row) => row.quantity === 'current' && row.phase !== 'N');
	const hasNeutral = context.system !== 'three-wire';
	return {
		kind: 'losses',
		highestOrder,
		ratedCurrent_A: rated?.current_A ?? null,
		ratedFrom: rated?.from ?? null,
		eddyLoss_pct: 100 * ASSUMED_EDDY_LOSS,
		phases: lines.map((row) => lossReading(row, windows, context, hasNeutral)),
		hasNeutral,
		residualIt_A: figure(residualProduct(lines, windows, context))
	};
}

function lossReading(
	row: AnalysisSeriesRow,
	windows: readonly number[],
	{ highestOrder, frequency_Hz, label, rated }: LossContext,
	hasNeutral: boolean
): LossReading {
	const orders = ordersOver(row, row.components!, windows);
	const rms_A = rmsOver(row, windows);
	const lossFactor = eddyLossFactor(orders, highestOrder);
	const third_pct = (100 * orders[3]!) / rms_A;
	const loading = hasNeutral ? neutralLoading(rms_A, third_pct) : null;
	return {
		phase: row.phase,
		label: label(row.phase),
		rms_A: figure(rms_A),
		kFactor: rated ? figure(kFactor(orders, rated.current_A, highestOrder)) : null,
		eddyLossFactor: figure(lossFactor),
		strayLossFactor: figure(strayLossFactor(orders, highestOrder)),
		permissible_pu: figure(permissibleCurrent_pu(lossFactor, ASSUMED_EDDY_LOSS)),
		kRating: kRatingFor(lossFactor),
		loadFactorK: figure(loadFactorK(orders, ASSUMED_EDDY_SHARE, 1.7, highestOrder)),
		triplen_pctOfFundamental: figure((100 * familyContent(orders, 'triplen', highestOrder)) / orders[1]!),
		thirdHarmonic_pctOfRms: figure(third_pct),
		it_A: figure(telephoneProduct(orders, frequency_Hz, highestOrder)),
		tif: figure(telephoneInfluenceFactor(orders, frequency_Hz, highestOrder)),
		neutral: loading && {
			governs: loading.governs,
			reductionFactor: loading.reductionFactor,
			designCurrent_A: figure(loading.designCurrent_A),
			neutralCurrent_A: figure(loading.neutralCurrent_A)
		}
	};
}

/** I·T of three times the zero sequence, order by order as phasors; NaN without three line currents. */
function residualProduct(
	lines: readonly AnalysisSeriesRow[],
	windows: readonly number[],
	{ frequency_Hz, highestOrder }: LossContext
): number {
	if (lines.length !== 3) return NaN;
	const read = lines.map((row) => ({
		components: bufferToFloats(row.components!, row.interval_count * ORDER_STRIDE),
		phases_deg: bufferToFloats(row.phases_deg!, row.interval_count * ORDER_STRIDE)
	}));
	const residual = Float64Array.from({ length: ORDER_STRIDE }, (_, order) => {
		let square = 0;
		for (const window of windows) {
			const at = window * ORDER_STRIDE + order;
			let re = 0;
			let im = 0;
			for (const { components, phases_deg } of read) {
				const angle = (phases_deg[at]! * Math.PI) / 180;
				re += components[at]! * Math.cos(angle);
				im += components[at]! * Math.sin(angle);
			}
			square += re * re + im * im;
		}
		return Math.sqrt(square / windows.length);
	});
	return telephoneProduct(residual, frequency_Hz, highestOrder);
}
