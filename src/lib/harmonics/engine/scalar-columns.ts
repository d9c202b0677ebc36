import type { AggregationRule } from '../aggregation/column-sums';
import type { Phase } from '../../recording/phase';
import { LINE_PHASES } from '../../recording/phase';
import { ORDER_STRIDE } from '../intervals';
import type { Phasor } from '../phasor';
import { sequenceComponents, unbalance } from '../sequence/sequence-components';
import type { ChannelMapping, WaveformWindows } from '../waveform-analysis';

/** One figure per interval that is followed over time, beside the levels by order. */
export type ScalarMeasure =
	| 'active-power'
	| 'fundamental-active-power'
	| 'fundamental-reactive-power'
	| 'apparent-power'
	| 'negative-sequence-voltage'
	| 'zero-sequence-voltage'
	| 'negative-sequence-current'
	| 'peak'
	| 'dc'
	| FlickerMeasure;

/** Flicker is not made of windows: it comes from a meter of its own, ten minutes and two hours at a time. */
export type FlickerMeasure = 'short-term-flicker' | 'long-term-flicker' | 'greatest-flicker';

export type ScalarPhase = Phase | 'total';

export interface ScalarColumn {
	measure: ScalarMeasure;
	phase: ScalarPhase;
	quantity: 'voltage' | 'current' | 'power';
	unit: 'W' | 'var' | 'VA' | '%' | 'V' | 'A' | '1';
	rule: AggregationRule;
	/** Value of one window; NaN = no data. */
	of: (span: WaveformWindows, window: number) => number;
}

/**
 * The scalars that a capture with these channels has.
 * Powers are those of the conductors with a voltage to neutral and a current; the total stands where all of them have data.
 * source  IEEE Std 1459-2010, 3.1.2 (from memory); unbalance IEC 61000-4-30:2015, 5.7 (from memory)
 */
export function scalarColumns(
	mappings: readonly ChannelMapping[],
	pairs: readonly { voltage: number; current: number }[]
): ScalarColumn[] {
	return [
		...mappings.flatMap((mapping, m) => channelColumns(mapping, m)),
		...powerColumns(mappings, pairs),
		...unbalanceColumns(mappings)
	];
}

function channelColumns({ quantity, phase }: ChannelMapping, m: number): ScalarColumn[] {
	const unit = quantity === 'voltage' ? 'V' : 'A';
	return [
		{ measure: 'peak', phase, quantity, unit, rule: 'max', of: (span, w) => span.channels[m]!.peak[w]! },
		{ measure: 'dc', phase, quantity, unit, rule: 'mean', of: (span, w) => span.channels[m]!.dc[w]! }
	];
}

type PhaseValue = (span: WaveformWindows, pair: number, window: number) => number;

function powerColumns(
	mappings: readonly ChannelMapping[],
	pairs: readonly { voltage: number; current: number }[]
): ScalarColumn[] {
	const kinds: [ScalarMeasure, ScalarColumn['unit'], PhaseValue][] = [
		['active-power', 'W', (span, p, w) => span.powers[p]!.activePower_W[w]!],
		['fundamental-active-power', 'W', (span, p, w) => span.powers[p]!.fundamentalActivePower_W[w]!],
		['fundamental-reactive-power', 'var', (span, p, w) => span.powers[p]!.fundamentalReactivePower_var[w]!],
		[
			'apparent-power',
			'VA',
			(span, p, w) => span.channels[pairs[p]!.voltage]!.rms[w]! * span.channels[pairs[p]!.current]!.rms[w]!
		]
	];
	return kinds.flatMap(([measure, unit, value]): ScalarColumn[] => {
		const common = { measure, unit, quantity: 'power', rule: 'mean' } as const;
		const each = pairs.map(({ current }, p): ScalarColumn => ({
			...common,
			phase: mappings[current]!.phase,
			of: (span, w) => value(span, p, w)
		}));
		if (pairs.length < 2 || measure === 'apparent-power') return each;
		const total: ScalarColumn = {
			...common,
			phase: 'total',
			of: (span, w) => pairs.reduce((sum, _, p) => sum + value(span, p, w), 0)
		};
		return [...each, total];
	});
}

function unbalanceColumns(mappings: readonly ChannelMapping[]): ScalarColumn[] {
	const columns: ScalarColumn[] = [];
	const positions = (quantity: 'voltage' | 'current', phases: readonly Phase[]) => {
		const found = phases.map((phase) =>
			mappings.findIndex((m) => m.quantity === quantity && m.phase === phase)
		);
		return found.includes(-1) ? null : found;
	};
	const toNeutral = positions('voltage', LINE_PHASES);
	const lineToLine = positions('voltage', ['L1L2', 'L2L3', 'L3L1']);
	const currents = positions('current', LINE_PHASES);
	const common = { phase: 'total', unit: '%', rule: 'rms' } as const;
	const voltages = toNeutral ?? lineToLine;
	if (voltages) {
		columns.push({
			...common,
			quantity: 'voltage',
			measure: 'negative-sequence-voltage',
			// Line-to-line voltages turn with those to neutral: the ratio of the sequences is the same.
			of: (span, w) => unbalanceOf(span, voltages, w).u2_pct
		});
	}
	if (toNeutral) {
		columns.push({
			...common,
			quantity: 'voltage',
			measure: 'zero-sequence-voltage',
			of: (span, w) => unbalanceOf(span, toNeutral, w).u0_pct
		});
	}
	if (currents) {
		columns.push({
			...common,
			quantity: 'current',
			measure: 'negative-sequence-current',
			of: (span, w) => unbalanceOf(span, currents, w).u2_pct
		});
	}
	return columns;
}

function unbalanceOf(span: WaveformWindows, positions: readonly number[], w: number) {
	const at = w * ORDER_STRIDE + 1;
	const phasors = positions.map((m): Phasor => {
		const { components, phases_deg } = span.channels[m]!;
		return { rms: components[at]!, phase_deg: phases_deg[at]! };
	});
	return unbalance(sequenceComponents(phasors[0]!, phasors[1]!, phasors[2]!));
}
