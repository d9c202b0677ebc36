import { COMPLETE_RECORDED_SHARE } from '../assessment/evidence';
import type { StatisticRule } from '../limits/limit-set';
import { formatDuration } from '../units/format';
import type { CaptureCheck, CheckEvidence } from './capture-check';
import type { CaptureSubject, CheckedPoint } from './capture-subject';

const DAY_S = 86_400;
/** A gap or an overlap shorter than one 10/12-cycle window is none. */
const LEAST_BREAK_MS = 200;

type Placed = Pick<CaptureSubject, 'name' | 'start_ms' | 'duration_s'> & {
	stretches: readonly { from_s: number; to_s: number }[];
};

function placed(captures: readonly CaptureSubject[]): Placed[] {
	return captures
		.map(({ name, start_ms, duration_s, evidence }) => ({
			name,
			start_ms,
			duration_s,
			stretches: evidence?.stretches.length ? evidence.stretches : [{ from_s: 0, to_s: duration_s }]
		}))
		.sort((a, b) => a.start_ms - b.start_ms);
}

function end_ms({ start_ms, duration_s }: Pick<Placed, 'start_ms' | 'duration_s'>): number {
	return start_ms + 1000 * duration_s;
}

/** Gaps and overlaps between the captures of a survey; nothing to check with one capture. */
export function checkSequence(
	captures: readonly CaptureSubject[],
	{ timeZone }: CheckedPoint
): CaptureCheck[] {
	if (captures.length < 2) return [];
	const ordered = placed(captures);
	const overlaps: string[] = [];
	const gaps: string[] = [];
	const broken: { from_ms: number; to_ms: number; label: string; tone: 'bad' | 'attention' }[] = [];
	let before = ordered[0]!;
	for (const next of ordered.slice(1)) {
		const apart_ms = next.start_ms - end_ms(before);
		if (apart_ms > LEAST_BREAK_MS) {
			gaps.push(`${formatDuration(apart_ms / 1000)} between ${before.name} and ${next.name}`);
			broken.push({ from_ms: end_ms(before), to_ms: next.start_ms, label: 'gap', tone: 'attention' });
		}
		if (apart_ms < -LEAST_BREAK_MS) {
			const to_ms = Math.min(end_ms(before), end_ms(next));
			overlaps.push(`${formatDuration((to_ms - next.start_ms) / 1000)} of ${before.name} and ${next.name}`);
			broken.push({ from_ms: next.start_ms, to_ms, label: 'overlap', tone: 'bad' });
		}
		if (end_ms(next) > end_ms(before)) before = next;
	}
	const evidence: CheckEvidence = {
		kind: 'spans',
		timeZone,
		spans: [
			...ordered.map((one) => ({
				row: one.name,
				from_ms: one.start_ms,
				to_ms: end_ms(one),
				label: one.name,
				tone: 'plain' as const
			})),
			...broken.map((one) => ({ row: 'between them', ...one }))
		],
		marks: []
	};
	const base = { code: 'captures-in-sequence', title: 'Captures in sequence', channelIndex: null, evidence };
	if (overlaps.length > 0)
		return [
			{
				...base,
				code: 'captures-overlap',
				outcome: 'warns',
				sentence: `Captures overlap in time: ${overlaps.join('; ')}. No moment counts twice: of two captures the one that starts later gives way.`,
				advice:
					'Two recorders cannot both be right if they were not meant to run together: compare their clocks.'
			}
		];
	if (gaps.length > 0)
		return [
			{
				...base,
				code: 'captures-apart',
				outcome: 'notes',
				sentence: `There is time between the captures: ${gaps.join('; ')}. It counts as not measured.`,
				advice: ''
			}
		];
	return [
		{ ...base, outcome: 'passes', sentence: 'The captures follow one another without a break.', advice: '' }
	];
}

/** Time covered by any capture, seconds; overlaps count once. */
function covered_s(captures: readonly Placed[]): number {
	const spans = captures
		.flatMap(({ start_ms, stretches }) =>
			stretches.map(({ from_s, to_s }) => ({ from: start_ms / 1000 + from_s, to: start_ms / 1000 + to_s }))
		)
		.sort((a, b) => a.from - b.from);
	let sum = 0;
	let until = -Infinity;
	for (const { from, to } of spans) {
		sum += Math.max(0, to - Math.max(from, until));
		until = Math.max(until, to);
	}
	return sum;
}

/**
 * Whether enough was recorded for the longest period that a rule of the limit set asks for.
 * rules  of all tables that apply; empty when the edition states none
 */
export function checkDays(
	captures: readonly CaptureSubject[],
	rules: readonly Pick<StatisticRule, 'period' | 'percentile'>[],
	{ timeZone }: CheckedPoint
): CaptureCheck[] {
	if (captures.length === 0) return [];
	const base = { code: 'too-few-days', title: 'Days for the percentiles', channelIndex: null };
	if (rules.length === 0)
		return [
			{
				...base,
				outcome: 'not-checked',
				sentence: 'No limit set with percentiles applies at this point.',
				advice: '',
				evidence: null
			}
		];
	const period = rules.some((rule) => rule.period === 'week') ? 'week' : 'day';
	const need_s = (period === 'week' ? 7 : 1) * DAY_S;
	const ordered = placed(captures);
	const have_s = covered_s(ordered);
	const first_ms = ordered[0]!.start_ms;
	const evidence: CheckEvidence = {
		kind: 'spans',
		timeZone,
		spans: [
			...ordered.flatMap((one) =>
				one.stretches.map(({ from_s, to_s }) => ({
					row: 'recorded',
					from_ms: one.start_ms + 1000 * from_s,
					to_ms: one.start_ms + 1000 * to_s,
					label: one.name,
					tone: 'good' as const
				}))
			),
			{
				row: `one ${period}`,
				from_ms: first_ms,
				to_ms: first_ms + 1000 * need_s,
				label: `the ${period} that the limits ask for`,
				tone: 'plain'
			}
		],
		marks: []
	};
	const share = have_s / need_s;
	const told = `${formatDuration(have_s)} are recorded of the ${period === 'week' ? '7 days' : '24 h'} that the percentiles of the limit set ask for`;
	if (share >= COMPLETE_RECORDED_SHARE)
		return [{ ...base, outcome: 'passes', sentence: `${told}.`, advice: '', evidence }];
	return [
		{
			...base,
			outcome: 'warns',
			sentence: `${told} (${(100 * share).toFixed(1)} %).`,
			advice:
				'The verdict is marked as a snapshot or as partial. Leave the recorder for the whole period if it is to stand as a full assessment.',
			evidence
		}
	];
}
