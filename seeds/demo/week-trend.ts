import type { Phase } from '../../src/lib/recording/phase';
import type { TrendSeries } from '../../src/lib/recording/recording';
import type { TrendToWrite } from '../../src/lib/synthesis/delimited-text-writer';
import type { HarmonicTruth } from '../../src/lib/synthesis/waveform';
import { seededRandom } from '../../src/lib/synthesis/waveform-random';

const INTERVAL_S = 600;
const INTERVALS_PER_DAY = 144;

export interface WeekTruth {
	/** Local start "2026-03-03T00:00:00" with its offset from UTC. */
	startLocal: string;
	utcOffset_min: number;
	days: number;
	voltage_V: number;
	current_A: number;
	voltageHarmonics: readonly HarmonicTruth[];
	currentHarmonics: readonly HarmonicTruth[];
	/** Factor on the current of L1, L2, L3. */
	currentFactors: readonly [number, number, number];
	/** Load by hour of the day, 0 … 1; sets current and, with it, the distortion of the voltage. */
	load: (hour: number, day: number) => number;
	/** Intervals in which the recorder saw a dip. */
	flaggedAt: readonly number[];
	nominalFrequency_Hz: 50 | 60;
	withNeutral: boolean;
	seed: number;
}

/** Ten-minute values of every order on every phase over days: what a recorder left in place brings home. */
export function weekTrend(truth: WeekTruth): TrendToWrite {
	const count = truth.days * INTERVALS_PER_DAY;
	const random = seededRandom(truth.seed);
	const load = new Float64Array(count);
	for (let i = 0; i < count; i++)
		load[i] =
			truth.load((i % INTERVALS_PER_DAY) / 6, Math.floor(i / INTERVALS_PER_DAY)) *
			(1 + 0.03 * random.normal());
	const flagged = new Uint8Array(count);
	for (const index of truth.flaggedAt) flagged[index] = 1;

	const column = (
		quantity: 'voltage' | 'current',
		phaseHint: Phase | null,
		measure: TrendSeries['measure'],
		unit: TrendSeries['unit'],
		value: (i: number) => number
	): TrendSeries => ({
		name: '',
		quantity,
		phaseHint,
		measure,
		unit,
		values: Float64Array.from({ length: count }, (_, i) => value(i))
	});

	const series: TrendSeries[] = [
		column(
			'voltage',
			null,
			{ kind: 'frequency' },
			'Hz',
			() => truth.nominalFrequency_Hz + 0.012 * random.normal()
		)
	];
	for (const phase of ['L1', 'L2', 'L3'] as const) {
		series.push(
			column(
				'voltage',
				phase,
				{ kind: 'order', order: 1 },
				'V',
				() => truth.voltage_V * (1 + 0.004 * random.normal())
			)
		);
		for (const { order, magnitude_pctOfFundamental: pct } of truth.voltageHarmonics)
			series.push(
				column('voltage', phase, { kind: 'order', order }, 'V', (i) =>
					Math.abs((truth.voltage_V * pct * (0.55 + 0.45 * load[i]!) * (1 + 0.02 * random.normal())) / 100)
				)
			);
	}
	for (const [index, phase] of (['L1', 'L2', 'L3'] as const).entries()) {
		const share = truth.currentFactors[index] ?? 1;
		series.push(
			column('current', phase, { kind: 'order', order: 1 }, 'A', (i) => truth.current_A * share * load[i]!)
		);
		for (const { order, magnitude_pctOfFundamental: pct } of truth.currentHarmonics)
			series.push(
				column('current', phase, { kind: 'order', order }, 'A', (i) =>
					Math.abs(
						(truth.current_A * share * pct * (0.7 + 0.3 * load[i]!) * (1 + 0.03 * random.normal())) / 100
					)
				)
			);
	}
	if (truth.withNeutral) {
		series.push(
			column('current', 'N', { kind: 'order', order: 1 }, 'A', (i) => 0.06 * truth.current_A * load[i]!)
		);
		for (const { order, magnitude_pctOfFundamental: pct } of truth.currentHarmonics)
			series.push(
				column('current', 'N', { kind: 'order', order }, 'A', (i) =>
					// Triplens of the three phases add in the neutral; the others nearly cancel.
					Math.abs((truth.current_A * pct * (order % 3 === 0 ? 2.9 : 0.08) * (0.7 + 0.3 * load[i]!)) / 100)
				)
			);
	}
	return {
		start: { local: truth.startLocal, utcOffset_min: truth.utcOffset_min },
		intervalStarts_s: Float64Array.from({ length: count }, (_, i) => i * INTERVAL_S),
		flagged,
		series
	};
}
