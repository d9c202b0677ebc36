import {
	inputToPrimary,
	matchInputs,
	type InputSensor,
	type MeasuringInput,
	type MeasuringInstrument
} from './measuring-input';
import { phaseHints } from './phase-hint';
import { formatPhase, LINE_TO_LINE_PHASES, type Phase, type PhaseNames } from './phase';
import type { OpenedCapture } from './read-capture';
import type { CaptureContent, TrendSeries } from './recording';
import type { SourceChannel } from './sample-source';

/** The facts of a point that a suggestion leans on. */
export interface SuggestionPoint {
	system: 'single-phase' | 'split-phase' | 'three-wire' | 'four-wire';
	phaseNames: PhaseNames;
	/** Transformer ratios at the point (both terms on one scale); null = connected directly or not known. */
	voltageTransformer: { primary: number; secondary: number } | null;
	currentTransformer: { primary: number; secondary: number } | null;
}

/** A guess about one channel, always with its reason; the engineer confirms or changes it. */
export interface MappingSuggestion {
	/** Index into Recording.channels or Trend.series. */
	channelIndex: number;
	/** Null: leave the channel out. */
	mapping: { quantity: 'voltage' | 'current'; phase: Phase; toPrimary: number } | null;
	/** How sure the guess is: stated by the file, read from a name, or none at all. */
	confidence: 'stated' | 'likely' | 'none';
	/** Sentences: why this quantity and conductor, and where the factor comes from. */
	reason: string;
}

/**
 * Quantity, conductor and factor to primary values for every channel of a capture.
 * The first channel of a quantity on a conductor is suggested; further ones (a second feeder) are left out.
 */
export function suggestMappings(
	content: CaptureContent | OpenedCapture,
	point: SuggestionPoint,
	instrument: MeasuringInstrument | null = null
): MappingSuggestion[] {
	const taken = new Map<string, string>();
	if (content.kind === 'trend')
		return content.series.map((series, index) => suggestSeries(series, index, point, taken));
	return suggestChannels(content.channels, content.format, point, instrument);
}

/** What a suggestion needs of a channel: the file need not be opened again for it. */
export type SuggestedChannel = Pick<
	SourceChannel,
	'index' | 'name' | 'unitAsWritten' | 'quantity' | 'phaseHint' | 'valuesAre' | 'ratio'
>;

/**
 * The same for the channels of a waveform alone.
 * instrument  what recorded them, for the ratios of its sensors; null = not known
 */
export function suggestChannels(
	channels: readonly SuggestedChannel[],
	format: string,
	point: SuggestionPoint,
	instrument: MeasuringInstrument | null
): MappingSuggestion[] {
	if (format === 'WAV')
		return channels.map(({ index }) =>
			leftOut(index, 'A sound file tells neither what a channel measures nor in which unit.')
		);
	const taken = new Map<string, string>();
	const inputs = inputsOf(channels, instrument);
	return channels.map((channel, i) => suggestChannel(channel, point, taken, inputs[i] ?? null));
}

/** The input behind a channel, with what the input's own name says of the conductor. */
interface ChannelInput extends MeasuringInput {
	instrumentName: string;
	phaseHint: Phase | null;
}

function inputsOf(
	channels: readonly SuggestedChannel[],
	instrument: MeasuringInstrument | null
): (ChannelInput | null)[] {
	if (instrument === null) return channels.map(() => null);
	const hints = phaseHints(instrument.inputs.map(({ name }) => ({ field: '', name })));
	return matchInputs(channels, instrument.inputs).map((index) =>
		index === null
			? null
			: {
					...instrument.inputs[index]!,
					instrumentName: instrument.name,
					phaseHint: hints[index] ?? null
				}
	);
}

function suggestChannel(
	channel: SuggestedChannel,
	point: SuggestionPoint,
	taken: Map<string, string>,
	input: ChannelInput | null
): MappingSuggestion {
	const quantity = quantityByInput(channel, input) ?? quantityOf(channel);
	if (quantity === null)
		return leftOut(
			channel.index,
			channel.unitAsWritten === ''
				? `The file gives no unit and the name “${channel.name}” tells neither voltage nor current.`
				: `Its unit “${channel.unitAsWritten}” is neither volts nor amperes.`
		);
	if (/(^|[^A-Za-z])[UVI]?DC([^A-Za-z]|$)/i.test(channel.name))
		return leftOut(channel.index, `The name “${channel.name}” says direct ${quantity.word}.`);
	const phase = channel.phaseHint ?? input?.phaseHint ?? singlePhase(point);
	if (phase === null)
		return leftOut(
			channel.index,
			`Neither the phase field nor the name “${channel.name}” tells the conductor.`
		);
	const misfit = misfitReason(quantity.value, phase, point);
	if (misfit !== null) return leftOut(channel.index, misfit);
	const key = `${quantity.value} ${phase}`;
	const earlier = taken.get(key);
	if (earlier !== undefined)
		return leftOut(
			channel.index,
			`“${earlier}” already gives the ${quantity.word} of ${formatPhase(phase, point.phaseNames)}.`
		);
	taken.set(key, channel.name);
	const factor =
		factorByInput(channel, quantity.value, point, input) ?? factorToPrimary(channel, quantity.value, point);
	const conductor =
		channel.phaseHint === null && input?.phaseHint
			? `the input “${input.name}” of ${input.instrumentName} is that of ${formatPhase(phase, point.phaseNames)}`
			: channel.phaseHint === null
				? `a ${point.system} point has one conductor to measure`
				: `the file’s phase field or the name “${channel.name}” points to ${formatPhase(phase, point.phaseNames)}`;
	return {
		channelIndex: channel.index,
		mapping: { quantity: quantity.value, phase, toPrimary: factor.toPrimary },
		confidence: quantity.isStated && channel.phaseHint !== null && factor.isStated ? 'stated' : 'likely',
		reason: `${quantity.reason}; ${conductor}. ${factor.reason}${threeWireCaution(quantity.value, phase, point)}`
	};
}

interface GuessedQuantity {
	value: 'voltage' | 'current';
	word: 'voltage' | 'current';
	isStated: boolean;
	reason: string;
}

/** Volts at a current input are what its sensor gives, not the voltage of the point. */
function quantityByInput(channel: SuggestedChannel, input: ChannelInput | null): GuessedQuantity | null {
	if (input === null || channel.quantity === input.quantity) return null;
	if (channel.quantity === 'other' && channel.unitAsWritten !== '') return null;
	const { quantity, sensor, name, instrumentName } = input;
	return {
		value: quantity,
		word: quantity,
		isStated: false,
		reason:
			channel.quantity === 'other' || sensor === null
				? `The input “${name}” of ${instrumentName} measures ${quantity}`
				: `The input “${name}” of ${instrumentName} measures ${quantity} through ${sensor.name}, which gives volts`
	};
}

function quantityOf(channel: SuggestedChannel): GuessedQuantity | null {
	const { quantity, unitAsWritten, name } = channel;
	if (quantity !== 'other') {
		const isStated = unitAsWritten !== '';
		const reason = isStated
			? `The unit ${unitAsWritten} says ${quantity}`
			: `The name “${name}” says ${quantity}`;
		return { value: quantity, word: quantity, isStated, reason };
	}
	return null;
}

function singlePhase(point: SuggestionPoint): Phase | null {
	return point.system === 'single-phase' ? 'L1' : null;
}

/** Voltages that a system does not have, or that its limits do not look at. */
function misfitReason(quantity: 'voltage' | 'current', phase: Phase, point: SuggestionPoint): string | null {
	const isPair = (LINE_TO_LINE_PHASES as readonly Phase[]).includes(phase);
	const name = formatPhase(phase, point.phaseNames);
	if (quantity === 'current' && isPair) return `A current flows in a conductor, not between two (${name}).`;
	if (quantity === 'current') return null;
	if (phase === 'N') return 'The voltage of the neutral is not judged.';
	if (isPair && point.system === 'four-wire')
		return `A four-wire point is judged by line-to-neutral voltages; ${name} is line-to-line.`;
	return null;
}

/** Still worth analysing, but not what the limits of a three-wire point look at. */
function threeWireCaution(quantity: 'voltage' | 'current', phase: Phase, point: SuggestionPoint): string {
	const isPair = (LINE_TO_LINE_PHASES as readonly Phase[]).includes(phase);
	if (quantity === 'current' || isPair || point.system !== 'three-wire') return '';
	return ' A three-wire point is judged by line-to-line voltages, and this one is line-to-neutral.';
}

interface Factor {
	toPrimary: number;
	isStated: boolean;
	reason: string;
}

/** What the file's values are before the sensor's ratio is counted; false where they are primary already. */
function areAtInput(channel: SuggestedChannel, { quantity }: ChannelInput, sensor: InputSensor): boolean {
	if (channel.valuesAre === 'primary') return false;
	// Amperes behind a sensor that gives volts: the recorder has counted its ratio.
	if (channel.quantity === quantity && sensor.gives !== quantity) return false;
	const own = channel.ratio;
	return !(channel.valuesAre === 'secondary' && own !== null && own.primary !== own.secondary);
}

/** The ratio of the sensor at the input; null where there is none, or the file's own word counts. */
function factorByInput(
	channel: SuggestedChannel,
	quantity: 'voltage' | 'current',
	point: SuggestionPoint,
	input: ChannelInput | null
): Factor | null {
	if (input === null || input.sensor === null || !areAtInput(channel, input, input.sensor)) return null;
	const { sensor, name, instrumentName } = input;
	const transformer = quantity === 'voltage' ? point.voltageTransformer : point.currentTransformer;
	const found = inputToPrimary(input, transformer);
	const where = `${sensor.name} is plugged into the input “${name}” of ${instrumentName}`;
	if (found === null)
		return {
			toPrimary: 1,
			isStated: false,
			reason: `${where}, and its ratio is not known: enter it. The values were left as they are.`
		};
	const both =
		found.throughBoth && transformer !== null
			? ` It is too small for the primary of the point’s ${transformer.primary}:${transformer.secondary}, so it was taken to measure on its secondary and both ratios were used.`
			: '';
	const open =
		channel.valuesAre === 'unknown' && channel.quantity === quantity
			? ' The file does not say whether its values are those at the input; they were taken as such. Check this.'
			: '';
	return {
		toPrimary: found.toPrimary,
		isStated: false,
		reason: `${where}: its ratio ${sensor.ratioText} was used.${both}${open}`
	};
}

/** Primary values need no factor; secondary ones need the file's ratio, or else the point's. */
function factorToPrimary(
	channel: Pick<SuggestedChannel, 'valuesAre' | 'ratio'>,
	quantity: 'voltage' | 'current',
	point: SuggestionPoint
): Factor {
	if (channel.valuesAre === 'primary')
		return { toPrimary: 1, isStated: true, reason: 'The file says that its values are primary: no factor.' };
	const ratio = quantity === 'voltage' ? point.voltageTransformer : point.currentTransformer;
	const own = channel.ratio;
	const side = channel.valuesAre === 'secondary' ? 'secondary' : null;
	if (side !== null && own !== null && own.primary !== own.secondary)
		return {
			toPrimary: own.primary / own.secondary,
			isStated: true,
			reason: `The file says that its values are secondary, with ratio ${own.primary}:${own.secondary}.`
		};
	if (side !== null && ratio !== null)
		return {
			toPrimary: ratio.primary / ratio.secondary,
			isStated: false,
			reason: `The file says that its values are secondary and gives no ratio; the point’s ${ratio.primary}:${ratio.secondary} was used.`
		};
	const open =
		side === null
			? 'The file does not say whether its values are primary or secondary'
			: 'The file says that its values are secondary, but neither it nor the point gives a ratio';
	return { toPrimary: 1, isStated: false, reason: `${open}; they were taken as primary. Check this.` };
}

function suggestSeries(
	series: TrendSeries,
	index: number,
	point: SuggestionPoint,
	taken: Map<string, string>
): MappingSuggestion {
	if (series.measure.kind === 'frequency')
		return leftOut(index, 'The frequency belongs to all conductors and needs no mapping.');
	const phase = series.phaseHint ?? singlePhase(point);
	if (phase === null) return leftOut(index, `The heading “${series.name}” does not tell the conductor.`);
	const misfit = misfitReason(series.quantity, phase, point);
	if (misfit !== null) return leftOut(index, misfit);
	const { measure } = series;
	const figure = measure.kind === 'order' ? `order ${measure.order}` : measure.kind;
	const key = `${series.quantity} ${phase} ${figure}`;
	const earlier = taken.get(key);
	if (earlier !== undefined)
		return leftOut(
			index,
			`“${earlier}” already gives this figure of ${formatPhase(phase, point.phaseNames)}.`
		);
	taken.set(key, series.name);
	const isAbsolute = series.unit === 'V' || series.unit === 'A';
	const { valuesAre } = series;
	const factor =
		valuesAre === undefined || !isAbsolute
			? null
			: factorToPrimary({ valuesAre, ratio: series.ratio ?? null }, series.quantity, point);
	const side = !isAbsolute
		? 'Percentages need no factor.'
		: (factor?.reason ??
			'A log does not say whether its values are primary; they were taken as primary. Check this.');
	return {
		channelIndex: index,
		mapping: { quantity: series.quantity, phase, toPrimary: factor?.toPrimary ?? 1 },
		confidence: factor?.isStated && series.phaseHint !== null ? 'stated' : 'likely',
		reason: `The heading “${series.name}” says ${series.quantity} of ${formatPhase(phase, point.phaseNames)}. ${side}`
	};
}

function leftOut(channelIndex: number, reason: string): MappingSuggestion {
	return { channelIndex, mapping: null, confidence: 'none', reason };
}
