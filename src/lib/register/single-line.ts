import { formatCurrent, formatVoltage } from '../units/format';
import type { PointFacts } from './point-facts';
import type { PointWorking } from './point-working';
import { tidyQuantity } from './tidy-quantity';

/** One element of a single-line sketch, from the supply down. */
export interface SingleLinePart {
	sign: 'source' | 'transformer' | 'bus' | 'load';
	title: string;
	/** Lines beside it; symbols as "I_sc". */
	notes: string[];
	/** The recorder is connected here. */
	measured: boolean;
}

function supply({ shortCircuit }: PointFacts): SingleLinePart {
	const part = { sign: 'source', title: 'Utility', measured: false } as const;
	if (shortCircuit.method !== 'transformer') return { ...part, notes: [] };
	const level_VA = shortCircuit.upstreamFaultLevel_VA;
	return {
		...part,
		notes: [level_VA === null ? 'taken as infinite' : `fault level ${tidyQuantity('fault-level', level_VA)}`]
	};
}

function transformer({ shortCircuit }: PointFacts): SingleLinePart[] {
	if (shortCircuit.method !== 'transformer') return [];
	const rating = tidyQuantity('apparent-power', shortCircuit.rating_VA);
	return [
		{
			sign: 'transformer',
			title: 'Transformer',
			notes: [`${rating}, Z ${tidyQuantity('percent', shortCircuit.impedance_pct)}`],
			measured: false
		}
	];
}

/** The network around a point as far as its facts tell it. */
export function singleLine(facts: PointFacts, working: PointWorking): SingleLinePart[] {
	const sc = working.shortCircuit.current_A;
	const demand = working.demand.current_A;
	const nominal = `${formatVoltage(facts.nominalVoltage_V)}, ${facts.nominalFrequency_Hz} Hz`;
	const here: SingleLinePart = {
		sign: 'bus',
		title: facts.name.length > 30 ? `${facts.name.slice(0, 29)}…` : facts.name,
		notes: [
			`${facts.kind === 'pcc' ? 'PCC' : 'in-plant point'}, ${nominal}`,
			`I_sc ${sc === null ? 'not known' : formatCurrent(sc)}`
		],
		measured: true
	};
	// Behind an in-plant point lies only part of the installation; its point of common coupling lies above.
	const coupling: SingleLinePart[] =
		facts.kind === 'pcc'
			? []
			: [{ sign: 'bus', title: 'Point of common coupling', notes: ['limits bind here'], measured: false }];
	const load: SingleLinePart = {
		sign: 'load',
		title: facts.kind === 'pcc' ? 'Installation' : 'Load behind the point',
		notes: [`I_L ${demand === null ? 'not known' : formatCurrent(demand)}`],
		measured: false
	};
	return [supply(facts), ...coupling, ...transformer(facts), here, load];
}
