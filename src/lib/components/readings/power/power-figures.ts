import type { DirectionIndication } from '$lib/harmonics/power/direction';
import type { SinglePhasePower } from '$lib/harmonics/power/apparent-power';
import type { ThreePhasePower } from '$lib/harmonics/power/effective-power';
import type { MeasuringChain } from '$lib/uncertainty/measuring-chain';
import type { Phase } from '$lib/recording/phase';

/** null = no data, never zero. */
type Figure = number | null;

export interface OrderPowerFigures {
	activePower_W: Figure;
	reactivePower_var: Figure;
	angle_deg: Figure;
	angleUncertainty_deg: Figure;
	activeShare: Figure;
	indication: DirectionIndication['indication'] | null;
	reason: DirectionIndication['reason'] | null;
}

/** What the page's server part hands over about powers. */
export interface PowerFigures {
	windowCount: number;
	highestOrder: number;
	notes: string[];
	phases: { phase: Phase; label: string; powers: Record<keyof SinglePhasePower, Figure> }[];
	total: {
		activePower_W: Figure;
		fundamentalActivePower_W: Figure;
		fundamentalReactivePower_var: Figure;
		effective: Record<keyof ThreePhasePower, Figure> | null;
		arithmetic_VA: Figure;
		vector_VA: Figure;
		arithmeticPowerFactor: Figure;
		vectorPowerFactor: Figure;
		neutral: 'measured' | 'computed' | null;
	} | null;
	orders: { order: number; phases: OrderPowerFigures[]; total: OrderPowerFigures | null }[];
	direction: { caveat: string; chain: MeasuringChain; load_A: Figure };
}
