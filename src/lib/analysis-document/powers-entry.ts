import type { PointPower } from '../harmonics/power/point-power';
import type { PointSequences } from '../harmonics/sequence/point-sequences';
import type { AnalysisDocument, PowersEntry } from './document-schema';
import { rounded } from './rounded';

/** Powers of each phase that has voltage and current, and of all together where the point is complete. */
export function powersEntries(power: PointPower | null): PowersEntry[] {
	if (!power) return [];
	const entries = power.phases.map(({ phase, powers }): PowersEntry => ({
		phase,
		activePower_W: rounded(powers.activePower_W),
		fundamentalActivePower_W: rounded(powers.fundamentalActivePower_W),
		fundamentalReactivePower_var: rounded(powers.fundamentalReactivePower_var),
		apparentPower_VA: rounded(powers.apparentPower_VA),
		powerFactor: rounded(powers.powerFactor),
		displacementFactor: rounded(powers.displacementFactor)
	}));
	const { total } = power;
	if (!total || entries.length < 2) return entries;
	const together = total.effective;
	return [
		...entries,
		{
			phase: 'total',
			activePower_W: rounded(total.activePower_W),
			fundamentalActivePower_W: rounded(total.fundamentalActivePower_W),
			fundamentalReactivePower_var: rounded(total.fundamentalReactivePower_var),
			apparentPower_VA: rounded(together?.effectiveApparentPower_VA ?? NaN),
			powerFactor: rounded(together?.powerFactor ?? NaN),
			displacementFactor: rounded(together?.positiveDisplacementFactor ?? NaN)
		}
	];
}

export function unbalanceEntry(sequences: PointSequences | null): AnalysisDocument['unbalance'] {
	return {
		u2_percent: rounded(sequences?.voltage?.u2_pct ?? NaN),
		u0_percent: rounded(sequences?.voltage?.u0_pct ?? NaN),
		i2_percent: rounded(sequences?.current?.u2_pct ?? NaN)
	};
}
