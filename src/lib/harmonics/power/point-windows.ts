import { LINE_PHASES, LINE_TO_LINE_PHASES, type Phase } from '../../recording/phase';
import type { PointSystem } from '../nominal-voltages';
import {
	combineOrderPhasors,
	emptyOrderPhasors,
	readOrderPhasors,
	squareOfOrders,
	type OrderPhasors,
	type WindowRows
} from '../order-phasors';

export type LinePhase = (typeof LINE_PHASES)[number];

/** Everything measured at a point on the same windows. */
export interface PointWindows {
	system: PointSystem;
	/** Orders above it were not measured. */
	highestOrder: number;
	voltages: Partial<Record<Phase, WindowRows>>;
	currents: Partial<Record<Phase, WindowRows>>;
}

/** The line conductors that a point has; of a single-phase point, those on which anything is measured. */
export function lineConductors(point: PointWindows): readonly LinePhase[] {
	switch (point.system) {
		case 'three-wire':
		case 'four-wire':
			return LINE_PHASES;
		case 'split-phase':
			return ['L1', 'L2'];
		case 'single-phase': {
			const used = LINE_PHASES.filter((phase) => point.voltages[phase] ?? point.currents[phase]);
			return used.length > 0 ? used : ['L1'];
		}
	}
}

/** Voltages or currents of several line conductors, read window by window into buffers of its own. */
export interface ConductorReader {
	phases: readonly LinePhase[];
	/** 'virtual-star': to the middle of the three line-to-line voltages, so without zero sequence. */
	origin: 'conductor' | 'virtual-star';
	/** Conductors or pairs that were not measured but follow from the others. */
	computed: readonly Phase[];
	/** [phases] of the window last read. */
	phasors: readonly OrderPhasors[];
	/** [phases] mean square of the window last read: true rms where measured, of the orders where computed. */
	squares: Float64Array;
	/** Sum of the mean squares of the three line-to-line voltages; NaN where they are not what was measured. */
	lineToLineSquares: number;
	/** False when a conductor has no data in the window. */
	read(window: number): boolean;
}

/** Reads what is measured on the conductors themselves; null when it is measured on none of them. */
function directReader(
	rows: PointWindows['voltages'],
	phases: readonly LinePhase[],
	highestOrder: number
): ConductorReader | null {
	const measured = phases.filter((phase) => rows[phase]);
	if (measured.length === 0) return null;
	const sources = measured.map((phase) => rows[phase]!);
	const phasors = sources.map(emptyOrderPhasors);
	const squares = new Float64Array(sources.length);
	return {
		phases: measured,
		origin: 'conductor',
		computed: [],
		phasors,
		squares,
		lineToLineSquares: NaN,
		read(window) {
			sources.forEach((source, i) => {
				readOrderPhasors(source, window, highestOrder, phasors[i]!);
				squares[i] = source.rms[window]! ** 2;
			});
			return hasData(phasors, squares);
		}
	};
}

/**
 * Star voltages of three line-to-line ones, of which one may be missing since the three add up to nothing:
 * U1 = (U12 − U31)/3 and so on round.
 */
function virtualStarReader(point: PointWindows): ConductorReader | null {
	const missing = LINE_TO_LINE_PHASES.filter((pair) => !point.voltages[pair]);
	if (missing.length > 1) return null;
	const pairs = LINE_TO_LINE_PHASES.map(() => emptyOrderPhasors());
	const pairSquares = new Float64Array(3);
	const phasors = LINE_PHASES.map(() => emptyOrderPhasors());
	const squares = new Float64Array(3);
	const reader: ConductorReader = {
		phases: LINE_PHASES,
		origin: 'virtual-star',
		computed: missing,
		phasors,
		squares,
		lineToLineSquares: NaN,
		read(window) {
			LINE_TO_LINE_PHASES.forEach((pair, i) => {
				const source = point.voltages[pair];
				if (!source) return;
				readOrderPhasors(source, window, point.highestOrder, pairs[i]!);
				pairSquares[i] = source.rms[window]! ** 2;
			});
			for (const pair of missing) {
				const at = LINE_TO_LINE_PHASES.indexOf(pair);
				combineOrderPhasors(pairs[(at + 1) % 3]!, -1, pairs[(at + 2) % 3]!, -1, pairs[at]!);
				pairSquares[at] = squareOfOrders(pairs[at]!, point.highestOrder);
			}
			LINE_PHASES.forEach((_, i) => {
				combineOrderPhasors(pairs[i]!, 1 / 3, pairs[(i + 2) % 3]!, -1 / 3, phasors[i]!);
				squares[i] = squareOfOrders(phasors[i]!, point.highestOrder);
			});
			reader.lineToLineSquares = pairSquares[0]! + pairSquares[1]! + pairSquares[2]!;
			return hasData(pairs, pairSquares);
		}
	};
	return reader;
}

/** Voltages of the line conductors, to neutral where that is measured, else to a virtual star; null when neither is there. */
export function voltageReader(point: PointWindows): ConductorReader | null {
	const lines = lineConductors(point);
	const direct = directReader(point.voltages, lines, point.highestOrder);
	const threePhase = point.system === 'three-wire' || point.system === 'four-wire';
	const star = threePhase ? virtualStarReader(point) : null;
	// Without a neutral the pairs are what a meter reads; with one, a complete set to neutral says more.
	if (star && (point.system === 'three-wire' || (direct?.phases.length ?? 0) < 3)) return star;
	return direct;
}

/** Currents of the line conductors; in a three-wire system the third follows from two. Null when none is measured. */
export function currentReader(point: PointWindows): ConductorReader | null {
	const lines = lineConductors(point);
	const direct = directReader(point.currents, lines, point.highestOrder);
	if (!direct || point.system !== 'three-wire' || direct.phases.length !== 2) return direct;
	const third = lines.find((phase) => !direct.phases.includes(phase))!;
	const computed = emptyOrderPhasors();
	const place = lines.indexOf(third);
	const phasors = [...direct.phasors.slice(0, place), computed, ...direct.phasors.slice(place)];
	const squares = new Float64Array(3);
	return {
		...direct,
		phases: lines,
		computed: [third],
		phasors,
		squares,
		read(window) {
			const complete = direct.read(window);
			combineOrderPhasors(direct.phasors[0]!, -1, direct.phasors[1]!, -1, computed);
			lines.forEach((phase, i) => {
				const own = direct.phases.indexOf(phase);
				squares[i] = own < 0 ? squareOfOrders(computed, point.highestOrder) : direct.squares[own]!;
			});
			return complete;
		}
	};
}

function hasData(phasors: readonly OrderPhasors[], squares: Float64Array): boolean {
	return (
		squares.every((square) => !Number.isNaN(square)) &&
		phasors.every((phasor) => !Number.isNaN(phasor.re[1]!) && !Number.isNaN(phasor.im[1]!))
	);
}

export interface UnmappedConductor {
	quantity: 'voltage' | 'current';
	phase: LinePhase;
}

/** What would have to be measured as well for powers and sequences to be complete. */
export function unmappedConductors(point: PointWindows): UnmappedConductor[] {
	const lines = lineConductors(point);
	const voltages = voltageReader(point)?.phases ?? [];
	const currents = currentReader(point)?.phases ?? [];
	const absent = (quantity: UnmappedConductor['quantity'], has: readonly LinePhase[]) =>
		lines.filter((phase) => !has.includes(phase)).map((phase) => ({ quantity, phase }));
	return [...absent('voltage', voltages), ...absent('current', currents)];
}
