import { createAggregator, type Aggregator } from '../aggregation/aggregator';
import type { ColumnRun } from '../aggregation/column-sums';
import type { Aggregate, AggregateInterval } from '../aggregation/interval-group';
import { emptySeries } from '../interval-series';
import { ORDER_STRIDE, type IntervalKind, type IntervalSeries } from '../intervals';
import type { ChannelMapping, WaveformWindows } from '../waveform-analysis';
import { scalarColumns, type ScalarColumn } from './scalar-columns';

/** One scalar over the intervals of one kind. */
export type ScalarSeries = Pick<ScalarColumn, 'measure' | 'phase' | 'quantity' | 'unit'> & {
	interval: IntervalKind;
	/** [n] milliseconds since 1970-01-01 UTC. */
	starts_ms: Float64Array;
	/** [n] NaN = no data. */
	values: Float64Array;
};

/** Levels by order that are followed over time, in the order of the columns of one channel. */
const LEVELS = ['subgroups', 'interharmonicSubgroups'] as const;
/** Columns of one channel: rms, then the levels. */
const CHANNEL_COLUMNS = 1 + LEVELS.length * ORDER_STRIDE;

type KeptAggregate = Omit<Aggregate, 'counts'>;

/**
 * Makes 3 s, 10 min and 2 h values of a capture from its windows, span by span; keeps the aggregates only.
 * source  IEC 61000-4-30:2015, 4.4 to 4.7 (from memory)
 */
export class IntervalCollector {
	private readonly aggregator: Aggregator;
	private readonly scalars: ScalarColumn[];
	private readonly row: Float64Array;
	private readonly kept: Record<AggregateInterval, KeptAggregate[]> = { '3s': [], '10min': [], '2h': [] };

	/** start_ms  instant of sample 0, milliseconds since 1970-01-01 UTC */
	constructor(
		private readonly mappings: readonly ChannelMapping[],
		pairs: readonly { voltage: number; current: number }[],
		private readonly start_ms: number
	) {
		this.scalars = scalarColumns(mappings, pairs);
		this.row = new Float64Array(mappings.length * CHANNEL_COLUMNS + this.scalars.length);
		this.aggregator = createAggregator({
			columns: [
				{ rule: 'rms', count: mappings.length * CHANNEL_COLUMNS },
				...this.scalars.map(({ rule }): ColumnRun => ({ rule, count: 1 }))
			],
			resynchronised: true,
			onAggregate: ({ counts: _counts, ...aggregate }) =>
				this.kept[aggregate.interval].push({ ...aggregate, row: aggregate.row.slice() })
		});
	}

	accept(span: WaveformWindows): void {
		const { row } = this;
		const scalars = this.scalarValues(span);
		for (let w = 0; w < span.windowCount; w++) {
			let at = 0;
			for (const channel of span.channels) {
				row[at++] = channel.rms[w]!;
				for (const level of LEVELS) {
					const values = channel[level];
					const from = w * ORDER_STRIDE;
					for (let order = 0; order < ORDER_STRIDE; order++) row[at++] = values[from + order]!;
				}
			}
			for (const values of scalars) row[at++] = values[w]!;
			this.aggregator.push(
				{
					start_ms: this.start_ms + 1000 * span.windowStarts_s[w]!,
					length_s: span.windowLengths_s[w]!,
					frequency_Hz: span.frequency_Hz[w]!,
					flagged: span.flagged[w] === 1,
					resync: span.resync[w] === 1
				},
				row
			);
		}
	}

	private scalarValues(span: WaveformWindows): Float64Array[] {
		return this.scalars.map(({ of }) => {
			const values = new Float64Array(span.windowCount);
			for (let w = 0; w < values.length; w++) values[w] = of(span, w);
			return values;
		});
	}

	/** Ends the collection; call once, before reading. */
	finish(): void {
		this.aggregator.finish();
	}

	/** Per channel the levels of one kind of interval; interharmonic subgroups beside them. */
	series(interval: AggregateInterval): (IntervalSeries & { interharmonicSubgroups: Float64Array })[] {
		const kept = this.kept[interval];
		return this.mappings.map(({ quantity, phase }, m) => {
			const series = {
				...emptySeries({ quantity, phase, interval }, kept.length),
				interharmonicSubgroups: new Float64Array(kept.length * ORDER_STRIDE)
			};
			const at = m * CHANNEL_COLUMNS;
			kept.forEach((aggregate, i) => {
				series.starts_ms[i] = aggregate.start_ms;
				series.lengths_s[i] = aggregate.length_s;
				series.frequency_Hz[i] = aggregate.frequency_Hz;
				series.flagged[i] = aggregate.flagged ? 1 : 0;
				series.rms[i] = aggregate.row[at]!;
				LEVELS.forEach((level, l) => {
					const from = at + 1 + l * ORDER_STRIDE;
					series[level].set(aggregate.row.subarray(from, from + ORDER_STRIDE), i * ORDER_STRIDE);
				});
			});
			return series;
		});
	}

	/** Scalars over one kind of interval. */
	scalarSeries(interval: AggregateInterval): ScalarSeries[] {
		const kept = this.kept[interval];
		const starts_ms = Float64Array.from(kept, (aggregate) => aggregate.start_ms);
		return this.scalars.map(({ measure, phase, quantity, unit }, s) => ({
			measure,
			phase,
			quantity,
			unit,
			interval,
			starts_ms,
			values: Float64Array.from(
				kept,
				(aggregate) => aggregate.row[this.mappings.length * CHANNEL_COLUMNS + s]!
			)
		}));
	}

	/** Scalars of the windows of one span. */
	windowScalars(span: WaveformWindows): ScalarSeries[] {
		const starts_ms = span.windowStarts_s.map((s) => this.start_ms + 1000 * s);
		return this.scalarValues(span).map((values, s) => {
			const { measure, phase, quantity, unit } = this.scalars[s]!;
			return { measure, phase, quantity, unit, interval: 'window', starts_ms, values };
		});
	}
}
