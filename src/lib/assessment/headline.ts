import type { IntervalSeries } from '../harmonics/intervals';
import type { LimitBasis } from '../limits/limit-set';
import { selectPercentileNearestRank } from '../numerics/stats/percentile-nearest-rank';
import type { Assessment, AssessedPoint } from './assessment';
import { fewestForPercentile } from './evidence';
import { intervalLevels, levelBaseOf, type LevelBase, type LevelItem } from './interval-levels';
import { nominalVoltageOn_V, shortCircuitRatio } from './judged-phases';
import { snapshotSeries, type PhaseData } from './phase-data';
import { snapshotValue } from './snapshot';

const TOTAL: LevelItem = { kind: 'total', from: 2, to: 50 };

/** Valid levels of a series. */
function validLevels(series: IntervalSeries, levels_pct: Float64Array): Float64Array {
	return levels_pct.filter((level, i) => series.flagged[i] !== 1 && !Number.isNaN(level));
}

/**
 * The one figure that stands for a phase beside its verdict: the 95th percentile of the 10-minute values where
 * there are enough of them, else the greatest 3-second value or window. Never a mean.
 * returns  null when some order of the sum was not recorded
 */
function headlineValue(data: PhaseData, base: LevelBase): number | null {
	const tenMinute = data.byKind.get('10min');
	if (tenMinute !== undefined) {
		const valid = validLevels(tenMinute, intervalLevels(tenMinute, TOTAL, base).levels_pct);
		if (valid.length >= fewestForPercentile(95)) return selectPercentileNearestRank(valid, 0.95);
	}
	const series = snapshotSeries(data);
	if (series === null) return null;
	return snapshotValue(series, intervalLevels(series, TOTAL, base).levels_pct)?.value_pct ?? null;
}

/**
 * Figures shown beside the verdict: TDD (of demand current) next to THD (of the fundamental) of every current, the
 * neutral included, and THD of every voltage on the basis of the set's own voltage table.
 */
export function headlineOf(
	point: AssessedPoint,
	phases: PhaseData[],
	voltageBasis: LimitBasis
): Assessment['headline'] {
	const figures = (
		quantity: 'voltage' | 'current',
		baseOf: (data: PhaseData) => LevelBase | null
	): { phase: PhaseData['phase']; value_pct: number }[] =>
		phases
			.filter((data) => data.quantity === quantity)
			.flatMap((data) => {
				const base = baseOf(data);
				const value_pct = base === null ? null : headlineValue(data, base);
				return value_pct === null ? [] : [{ phase: data.phase, value_pct }];
			});
	return {
		tdd: figures('current', () => levelBaseOf('demand-current', point.demandCurrent_A)),
		currentThd: figures('current', () => levelBaseOf('fundamental', null)),
		voltageThd: figures('voltage', ({ phase }) =>
			levelBaseOf(voltageBasis, nominalVoltageOn_V(point, phase))
		),
		shortCircuitRatio: shortCircuitRatio(point)
	};
}
