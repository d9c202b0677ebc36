import type { TrendSeries } from '../../recording';
import { quantityOf } from './channel-meaning';
import type { ChannelDefinition, SeriesDefinition } from './definitions';
import { CHARACTERISTIC, CHARACTERISTIC_NAMES, MEASURED, UNIT, VALUE_TYPE } from './pqdif-ids';

/** What one series of values is, or why it is left out, as words. */
export type TrendMeaning =
	| {
			kind: 'series';
			quantity: TrendSeries['quantity'];
			measure: TrendSeries['measure'];
			unit: TrendSeries['unit'];
	  }
	| { kind: 'flags' }
	| { kind: 'left-out'; words: string };

const HIGHEST_ORDER = 100;
/** A line this close to a whole order, as a share of the nominal frequency, is that order. */
const ORDER_TOLERANCE = 0.05;

/** The part of a channel's instance that says which line of a spectrum it is. */
export interface LineOfSpectrum {
	frequency_Hz: number | null;
	group: number | null;
}

/**
 * The meaning of a series by its characteristic, unit and, for spectra, by the order of its channel.
 * nominalFrequency_Hz  turns the frequency of a line into its order; null where it is not known
 */
export function meaningOf(
	channel: ChannelDefinition,
	series: SeriesDefinition,
	line: LineOfSpectrum,
	nominalFrequency_Hz: number | null
): TrendMeaning {
	const { characteristic, units } = series;
	if (characteristic === CHARACTERISTIC.flagging || characteristic === CHARACTERISTIC.flaggingOf61000_4_30)
		return { kind: 'flags' };
	if (characteristic === CHARACTERISTIC.frequency)
		return units === UNIT.hertz || units === UNIT.none
			? { kind: 'series', quantity: 'voltage', measure: { kind: 'frequency' }, unit: 'Hz' }
			: leftOut('frequency in a unit that is not hertz');
	const quantity = quantityOf(channel.measured, units);
	const named = CHARACTERISTIC_NAMES[characteristic];
	if (named !== undefined) return leftOut(named);
	if (quantity === 'other') return leftOut(otherWords(channel.measured));
	const measure = measureOf(characteristic, line, nominalFrequency_Hz);
	if (typeof measure === 'string') return leftOut(measure);
	const absolute = quantity === 'voltage' ? 'V' : 'A';
	if (units === UNIT.volts || units === UNIT.amperes)
		return { kind: 'series', quantity, measure, unit: absolute };
	if (units === UNIT.percent && measure.kind !== 'rms')
		return { kind: 'series', quantity, measure, unit: 'percent-of-fundamental' };
	return leftOut(
		units === UNIT.percent
			? 'rms in percent'
			: units === UNIT.perUnit
				? 'per-unit values'
				: 'values without a unit'
	);
}

function measureOf(
	characteristic: string,
	{ frequency_Hz, group }: LineOfSpectrum,
	nominalFrequency_Hz: number | null
): TrendSeries['measure'] | string {
	if (characteristic === CHARACTERISTIC.thd) return { kind: 'thd' };
	const isSpectrum =
		characteristic === CHARACTERISTIC.spectra || characteristic === CHARACTERISTIC.harmonicGroup;
	const hasLine = frequency_Hz !== null || group !== null;
	if (!isSpectrum && characteristic !== CHARACTERISTIC.rms) return 'other characteristics';
	if (!isSpectrum && !hasLine) return { kind: 'rms' };
	if (group !== null) return orderOrWords(group);
	if (frequency_Hz === null) return 'spectra without an order or a frequency';
	if (nominalFrequency_Hz === null) return 'spectra by frequency without a nominal frequency';
	const order = frequency_Hz / nominalFrequency_Hz;
	return Math.abs(order - Math.round(order)) < ORDER_TOLERANCE
		? orderOrWords(Math.round(order))
		: 'interharmonic lines';
}

function orderOrWords(order: number): TrendSeries['measure'] | string {
	if (!Number.isInteger(order) || order < 0) return 'spectra without a whole order';
	return order <= HIGHEST_ORDER ? { kind: 'order', order } : `orders above ${HIGHEST_ORDER}`;
}

function leftOut(words: string): TrendMeaning {
	return { kind: 'left-out', words };
}

function otherWords(measured: number): string {
	return measured === MEASURED.voltage || measured === MEASURED.current
		? 'other values'
		: 'quantities that are neither voltage nor current';
}

const AVERAGES: string[] = [
	VALUE_TYPE.average,
	VALUE_TYPE.rms,
	VALUE_TYPE.value,
	VALUE_TYPE.instantaneous,
	VALUE_TYPE.status
];

/** The series of a channel whose values are judged: the average where there is one, else what stands for it. */
export function judgedSeries(channel: ChannelDefinition): number {
	for (const type of AVERAGES) {
		const index = channel.series.findIndex((series) => series?.valueType === type);
		if (index >= 0) return index;
	}
	return -1;
}

export function extremeOf({ valueType }: SeriesDefinition): 'minimum' | 'maximum' | null {
	if (valueType === VALUE_TYPE.minimum) return 'minimum';
	return valueType === VALUE_TYPE.maximum ? 'maximum' : null;
}
