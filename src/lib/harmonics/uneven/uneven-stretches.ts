import { selectRank } from '../../numerics/stats/select-rank';
import { err, ok, type Result } from '../../result';
import type { AnalysisProblem } from '../analysis-problem';
import type { Stretch } from '../engine/stretches';

/** A step of more than so many median steps is a gap: no straight line is drawn across it. */
export const GAP_IN_MEDIAN_STEPS = 5;

/** How the instants of a capture lie, gaps left out. */
export interface StepFacts {
	median_s: number;
	shortest_s: number;
	longest_s: number;
	/** Steps that are gaps. */
	gaps: number;
}

export interface UnevenStretches {
	/**
	 * Runs of at least three samples without a gap, in order of time. Their rate is the mean one: places in a stretch are
	 * counted in mean steps from its first sample, so that place and sample number agree at both ends and only there.
	 */
	list: Stretch[];
	steps: StepFacts;
}

/**
 * Parts the instants of a capture at its gaps.
 * stamps_s  [n] seconds; any origin
 * returns   at least one stretch, or a problem when the stamps do not ascend throughout or all lie alone
 */
export function unevenStretches(stamps_s: Float64Array): Result<UnevenStretches, AnalysisProblem> {
	const count = Math.max(0, stamps_s.length - 1);
	const steps = new Float64Array(count);
	for (let i = 0; i < count; i++) {
		steps[i] = stamps_s[i + 1]! - stamps_s[i]!;
		if (!(steps[i]! > 0)) return notAscending(i + 1);
	}
	if (count < 2) return notAscending(count);
	const median_s = selectRank(steps.slice(), count >> 1);
	const facts: StepFacts = { median_s, shortest_s: Infinity, longest_s: 0, gaps: 0 };
	const list: Stretch[] = [];
	let from = 0;
	for (let i = 0; i <= count; i++) {
		const isGap = i === count || steps[i]! > GAP_IN_MEDIAN_STEPS * median_s;
		if (!isGap) {
			facts.shortest_s = Math.min(facts.shortest_s, steps[i]!);
			facts.longest_s = Math.max(facts.longest_s, steps[i]!);
			continue;
		}
		if (i < count) facts.gaps++;
		if (i - from >= 2) {
			list.push({
				samplingRate_Hz: (i - from) / (stamps_s[i]! - stamps_s[from]!),
				fromSample: from,
				toSample: i + 1,
				offset_s: stamps_s[from]! - stamps_s[0]!
			});
		}
		from = i + 1;
	}
	return list.length > 0 ? ok({ list, steps: facts }) : notAscending(1);
}

function notAscending(sample: number): Result<UnevenStretches, AnalysisProblem> {
	return err({
		code: 'rate-not-known',
		sentence:
			`The capture states no sampling rate, and its time stamps do not ascend without gaps from sample ${sample} ` +
			`(counted from 0) on. Export it again with its sampling rate, or with ascending time stamps.`
	});
}

/** Instant of a place in a stretch, seconds on the scale of the stamps. */
export function instantOf(stretch: Stretch, stamps_s: Float64Array, place: number): number {
	return stamps_s[stretch.fromSample]! + (place - stretch.fromSample) / stretch.samplingRate_Hz;
}
