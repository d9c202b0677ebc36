import { balancedSequence, type Rotation } from '../../../harmonics/sequence/order-sequences';
import {
	NeutralCurrentSums,
	type NeutralCurrent,
	type NeutralLevels
} from '../../../harmonics/sequence/neutral-current';
import {
	PointSequenceSums,
	type PointSequences,
	type QuantitySequences
} from '../../../harmonics/sequence/point-sequences';
import type { PointWindows } from '../../../harmonics/power/point-windows';
import { formatCurrent } from '../../../units/format';
import { pointWindows, type PointContext } from './point-windows';
import { figure, type Figure } from './reading-figure';
import { unmappedNotes } from './unmapped-notes';
import type { WindowRows } from './window-rows';

export interface SequenceFigures {
	rms: Figure;
	phase_deg: Figure;
}

/** One quantity at one order. */
export interface OrderSequenceReading {
	positive: SequenceFigures;
	negative: SequenceFigures;
	zero: SequenceFigures;
}

export interface NeutralLevelsReading {
	rms_A: Figure;
	oddTriplenShare: Figure;
	multiplesOfThreeShare: Figure;
	/** Index = order; A. */
	orders_A: Figure[];
}

export interface SequenceReadings {
	kind: 'sequence';
	highestOrder: number;
	windowCount: number;
	notes: string[];
	/** Null where neither three voltages nor three currents are measured. */
	sequences: {
		/** Conductors in the order in which they turn. */
		rotation: Rotation;
		rotationWords: string;
		rotationFrom: 'voltage' | 'current';
		voltage: { u2_pct: Figure; u0_pct: Figure; orders: OrderSequenceReading[] } | null;
		current: { u2_pct: Figure; u0_pct: Figure; orders: OrderSequenceReading[] } | null;
		lineDeviation_pct: Figure;
		lineToLine: { label: string; value_V: Figure }[];
		/** The sequence of each order where everything is balanced. */
		balanced: ('positive' | 'negative' | 'zero')[];
	} | null;
	/** Null with a sentence where there is no neutral current to state. */
	neutral: {
		measured: NeutralLevelsReading | null;
		computed: NeutralLevelsReading | null;
		comparison: { difference_A: Figure; difference_pct: Figure; turned: boolean } | null;
		/** Neutral rms beside the greatest line current. */
		ratioToLine: Figure;
	} | null;
	neutralNote: string | null;
}

/** Sequences of every order, unbalance and neutral current over the chosen windows. */
export function sequenceReadings({ rows, windows }: WindowRows, context: PointContext): SequenceReadings {
	const point = pointWindows(rows, context);
	const sums = new PointSequenceSums();
	const neutralSums = new NeutralCurrentSums();
	sums.add(point, windows);
	neutralSums.add(point, windows);
	const sequences = sums.finish();
	const neutral = neutralSums.finish();
	return {
		kind: 'sequence',
		highestOrder: context.highestOrder,
		windowCount: sequences?.windowCount ?? neutral?.windowCount ?? windows.length,
		notes: sequenceNotes(point, sequences, context),
		sequences: sequences && sequenceFigures(sequences, context),
		neutral: neutral && neutralFigures(neutral),
		neutralNote: neutral ? null : neutralNote(context)
	};
}

/** In a three-wire system, this share of the positive sequence may be left when three currents are added (common practice). */
const CLOSING_SHARE = 0.005;

function sequenceNotes(
	point: PointWindows,
	found: PointSequences | null,
	{ system, label, highestOrder }: PointContext
): string[] {
	if (system !== 'three-wire' && system !== 'four-wire')
		return ['Sequences belong to three phases; this point has fewer.'];
	const notes = unmappedNotes(point, label, 'its sequences are not known.');
	if (found?.voltage && Number.isNaN(found.voltage.u0_pct))
		notes.push('Voltages are measured line to line, where a zero sequence cannot be seen.');
	if (system === 'three-wire' && found?.current) {
		const left_A = 3 * Math.hypot(...found.current.zero.rms.subarray(0, highestOrder + 1));
		if (left_A > 3 * CLOSING_SHARE * found.current.positive.rms[1]!)
			notes.push(
				`The three currents leave ${formatCurrent(left_A)} when added, where three wires should leave nothing: a current to earth, or transducers that do not match.`
			);
	}
	return notes;
}

function neutralNote({ system }: PointContext): string {
	if (system === 'three-wire') return 'A three-wire point has no neutral conductor.';
	if (system === 'single-phase') return 'At a single-phase point the neutral carries the line current.';
	return 'The neutral current is neither measured nor can it be computed: that needs the current of every line conductor.';
}

function sequenceFigures(
	found: PointSequences,
	{ label, highestOrder }: PointContext
): SequenceReadings['sequences'] {
	const turns = found.rotation === 'L1-L2-L3' ? (['L1', 'L2', 'L3'] as const) : (['L1', 'L3', 'L2'] as const);
	const pairs = (['L1L2', 'L2L3', 'L3L1'] as const).map(label);
	return {
		rotation: found.rotation,
		rotationWords: turns.map(label).join('–'),
		rotationFrom: found.rotationFrom,
		voltage: found.voltage && quantityFigures(found.voltage, highestOrder),
		current: found.current && quantityFigures(found.current, highestOrder),
		lineDeviation_pct: figure(found.lineDeviation_pct),
		lineToLine: (found.lineToLine_V ?? []).map((value, i) => ({ label: pairs[i]!, value_V: figure(value) })),
		balanced: Array.from({ length: highestOrder + 1 }, (_, order) => balancedSequence(order))
	};
}

function quantityFigures(found: QuantitySequences, highestOrder: number) {
	const at = (name: 'positive' | 'negative' | 'zero', order: number): SequenceFigures => ({
		rms: figure(found[name].rms[order]),
		phase_deg: figure(found[name].phase_deg[order])
	});
	return {
		u2_pct: figure(found.u2_pct),
		u0_pct: figure(found.u0_pct),
		orders: Array.from({ length: highestOrder + 1 }, (_, order) => ({
			positive: at('positive', order),
			negative: at('negative', order),
			zero: at('zero', order)
		}))
	};
}

function neutralFigures(found: NeutralCurrent): SequenceReadings['neutral'] {
	const levels = (of: NeutralLevels | null): NeutralLevelsReading | null =>
		of && {
			rms_A: figure(of.rms_A),
			oddTriplenShare: figure(of.oddTriplenShare),
			multiplesOfThreeShare: figure(of.multiplesOfThreeShare),
			orders_A: Array.from(of.orders_A, figure)
		};
	return {
		measured: levels(found.measured),
		computed: levels(found.computed),
		comparison: found.comparison && {
			difference_A: figure(found.comparison.difference_A),
			difference_pct: figure(found.comparison.difference_pct),
			turned: found.comparison.turned
		},
		ratioToLine: figure(found.ratioToLine)
	};
}
