/** null = no data, never zero. */
type Figure = number | null;

export interface SequencePhasor {
	rms: Figure;
	phase_deg: Figure;
}

export type SequenceName = 'positive' | 'negative' | 'zero';
export const SEQUENCE_NAMES: readonly SequenceName[] = ['positive', 'negative', 'zero'];

export interface QuantityFigures {
	u2_pct: Figure;
	u0_pct: Figure;
	/** Index = order. */
	orders: Record<SequenceName, SequencePhasor>[];
}

export interface NeutralLevelFigures {
	rms_A: Figure;
	oddTriplenShare: Figure;
	multiplesOfThreeShare: Figure;
	/** Index = order; A. */
	orders_A: Figure[];
}

export interface NeutralFigures {
	measured: NeutralLevelFigures | null;
	computed: NeutralLevelFigures | null;
	comparison: { difference_A: Figure; difference_pct: Figure; turned: boolean } | null;
	ratioToLine: Figure;
}

/** What the page's server part hands over about sequences and the neutral. */
export interface SequenceViewFigures {
	highestOrder: number;
	windowCount: number;
	notes: string[];
	sequences: {
		rotation: 'L1-L2-L3' | 'L1-L3-L2';
		rotationWords: string;
		rotationFrom: 'voltage' | 'current';
		voltage: QuantityFigures | null;
		current: QuantityFigures | null;
		lineDeviation_pct: Figure;
		lineToLine: { label: string; value_V: Figure }[];
		balanced: SequenceName[];
	} | null;
	neutral: NeutralFigures | null;
	neutralNote: string | null;
}

/** Sequences below this share of the positive one at the fundamental are not listed, unless they are the fundamental's. */
const LISTED_SHARE = 0.001;

/** Orders at which some sequence of some quantity is worth a line. */
export function listedOrders(
	quantities: readonly (QuantityFigures | null)[],
	highestOrder: number
): number[] {
	const worthy = (quantity: QuantityFigures, order: number) => {
		const base = quantity.orders[1]?.positive.rms ?? null;
		return (
			base !== null &&
			SEQUENCE_NAMES.some((name) => (quantity.orders[order]?.[name].rms ?? 0) >= LISTED_SHARE * base)
		);
	};
	return Array.from({ length: highestOrder }, (_, i) => i + 1).filter(
		(order) => order === 1 || quantities.some((quantity) => quantity && worthy(quantity, order))
	);
}
