import type { ChannelEvidence } from '../harmonics/quality/capture-evidence';
import { formatPhase } from '../recording/phase';
import { formatOrdinal, formatPct } from '../units/format';
import type { CaptureCheck, CheckEvidence } from './capture-check';
import type { CaptureSubject, CheckedPoint, OrderLimits } from './capture-subject';

/**
 * A floor of a third of a limit lifts a level that lies at the limit by √(1 + 1/9) − 1 = 5 %: as much as a class I
 * instrument may be off (IEC 61000-4-7:2002, Table 1, from memory). Above it the recorder, not the network, is judged.
 */
export const MOST_OF_LIMIT = 1 / 3;

/** Noise between the harmonics against the limits that apply at the point, voltages and currents each by themselves. */
export function checkFloors(subject: CaptureSubject, point: CheckedPoint): CaptureCheck[] {
	if (subject.kind === 'trend') return [];
	return (['voltage', 'current'] as const).flatMap((quantity) => {
		const channels = (subject.evidence?.channels ?? []).filter(
			(channel) => channel.quantity === quantity && channel.phase !== 'N'
		);
		return channels.length === 0 ? [] : [checkFloor(quantity, channels, point)];
	});
}

interface Closest {
	channel: ChannelEvidence;
	order: number;
	floor_pct: number;
	limit_pct: number;
}

function checkFloor(
	quantity: 'voltage' | 'current',
	channels: readonly ChannelEvidence[],
	point: CheckedPoint
): CaptureCheck {
	const check = {
		code: `noise-floor-${quantity}`,
		title: `Noise floor of the ${quantity}s`,
		channelIndex: null,
		advice: '',
		evidence: null
	};
	const limits = point.limits[quantity];
	if (limits === null)
		return {
			...check,
			outcome: 'not-checked',
			sentence: `No limits of ${quantity} harmonics apply at this point, or what they are percent of is not known.`
		};
	const levels = channels.map((channel) => ({ channel, floor_pct: floorInPercent(channel, limits) }));
	const closest = closestToLimit(levels, limits);
	if (closest === null)
		return {
			...check,
			outcome: 'not-checked',
			sentence: 'There is no floor to be seen at an order with a limit.'
		};
	const { channel, order, floor_pct, limit_pct } = closest;
	const share = floor_pct / limit_pct;
	const sentence =
		`The floor between the harmonics comes closest to its limit at the ${formatOrdinal(order)} order of ` +
		`${formatPhase(channel.phase, point.phaseNames)}: ${formatPct(floor_pct)} against ${formatPct(limit_pct)} ` +
		`${limits.words}, ${formatPct(100 * share)} of it.`;
	const picture = { ...check, sentence, evidence: floorPicture(levels, limits, point) };
	if (share <= MOST_OF_LIMIT) return { ...picture, outcome: 'passes' };
	return {
		...picture,
		outcome: 'warns',
		advice:
			'Levels near these limits are lifted by the recorder’s noise. Use a smaller input range, a clamp that fits the load, or a recorder with more bits.'
	};
}

function floorInPercent(channel: ChannelEvidence, limits: OrderLimits): (number | null)[] {
	const base = limits.base(channel.phase) ?? channel.fundamental?.rms ?? null;
	return channel.floor.map((floor) => (floor === null || !base ? null : (100 * floor) / base));
}

function closestToLimit(
	levels: readonly { channel: ChannelEvidence; floor_pct: (number | null)[] }[],
	{ limits_pct }: OrderLimits
): Closest | null {
	let closest: Closest | null = null;
	for (const { channel, floor_pct: row } of levels) {
		row.forEach((floor_pct, order) => {
			const limit_pct = limits_pct[order] ?? null;
			if (floor_pct === null || limit_pct === null || !(limit_pct > 0)) return;
			if (closest === null || floor_pct / limit_pct > closest.floor_pct / closest.limit_pct)
				closest = { channel, order, floor_pct, limit_pct };
		});
	}
	return closest;
}

function floorPicture(
	levels: readonly { channel: ChannelEvidence; floor_pct: (number | null)[] }[],
	limits: OrderLimits,
	point: CheckedPoint
): CheckEvidence {
	const highest = Math.max(...levels.map(({ floor_pct }) => floor_pct.findLastIndex((v) => v !== null)));
	const orders = Array.from({ length: Math.max(0, highest - 1) }, (_, i) => i + 2);
	return {
		kind: 'floor',
		axis: `percent ${limits.words}`,
		orders,
		sets: levels.map(({ channel, floor_pct }) => ({
			label: formatPhase(channel.phase, point.phaseNames),
			phase: channel.phase,
			floor: orders.map((order) => floor_pct[order] ?? null)
		})),
		limits: orders.map((order) => limits.limits_pct[order] ?? null)
	};
}
