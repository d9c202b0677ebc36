import type { Phase, PhaseNames } from '$lib/recording/phase';
import { formatPhase } from '$lib/recording/phase';
import { formatCurrent, formatNumber } from '$lib/units/format';

interface PhaseValue {
	phase: Phase;
	value_pct: number;
}
interface TotalLimit {
	index: 'THD' | 'TDD';
	quantity: 'voltage' | 'current';
	limit_pct: number;
}
export interface HeadlineInput {
	headline: { tdd: PhaseValue[]; currentThd: PhaseValue[]; voltageThd: PhaseValue[] };
	totalLimits: TotalLimit[];
	overLimit: string[];
	/** Quantities with a conductor that a check of its capture blocks. */
	blockedQuantities: readonly ('voltage' | 'current')[];
	demandCurrent_A: number | null;
	phaseNames: PhaseNames;
}

function worst(values: readonly PhaseValue[]): PhaseValue | null {
	// The neutral is reported elsewhere and judged nowhere.
	return values
		.filter(({ phase }) => phase !== 'N')
		.reduce<PhaseValue | null>(
			(most, one) => (most === null || one.value_pct > most.value_pct ? one : most),
			null
		);
}

/** The figures beside a verdict: TDD on demand current next to THD on the fundamental, never one for the other. */
export function headlineFigures({
	headline,
	totalLimits,
	overLimit,
	blockedQuantities,
	demandCurrent_A,
	phaseNames
}: HeadlineInput) {
	const figure = (
		label: string,
		values: readonly PhaseValue[],
		limit: TotalLimit | undefined,
		absent: string
	) => {
		const one = worst(values);
		if (one === null) return { label, value: null, note: absent };
		const phase = `phase ${formatPhase(one.phase, phaseNames)}`;
		const over = limit !== undefined && one.value_pct > limit.limit_pct;
		return {
			label,
			value: `${formatNumber(one.value_pct)} %`,
			note: limit === undefined ? phase : `of ${formatNumber(limit.limit_pct, { decimals: 1 })} %, ${phase}`,
			tone: over ? ('exceeds' as const) : ('plain' as const)
		};
	};
	const absentBecause = (quantity: TotalLimit['quantity'], otherwise: string) =>
		blockedQuantities.includes(quantity) ? 'blocked by a check' : otherwise;
	const limitOf = (quantity: TotalLimit['quantity'], index: TotalLimit['index']) =>
		totalLimits.find((limit) => limit.quantity === quantity && limit.index === index);
	return [
		figure(
			'Current TDD, of I_L',
			headline.tdd,
			limitOf('current', 'TDD'),
			absentBecause('current', 'needs a demand current and currents')
		),
		figure(
			'Current THD, of the fundamental',
			headline.currentThd,
			limitOf('current', 'THD'),
			absentBecause('current', 'no currents recorded')
		),
		figure(
			'Voltage THD',
			headline.voltageThd,
			limitOf('voltage', 'THD'),
			absentBecause('voltage', 'no voltages recorded')
		),
		{
			label: 'Demand current I_L',
			value: demandCurrent_A === null ? null : formatCurrent(demandCurrent_A)
		},
		{
			label: 'Over their limit',
			value:
				overLimit.length === 0
					? 'none'
					: overLimit.length > 4
						? `${overLimit.length} figures`
						: overLimit.join(', '),
			tone: overLimit.length === 0 ? ('plain' as const) : ('exceeds' as const)
		}
	];
}
