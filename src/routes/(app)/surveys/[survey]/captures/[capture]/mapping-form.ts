import { formatPhase, PHASES, type Phase, type PhaseNames } from '$lib/recording/phase';
import { err, ok, type Result } from '$lib/result';
import { parseQuantity } from '$lib/units/quantity-input';
import { parseTypedNumber } from '$lib/units/typed-number';

/** One line of the mapping form: a channel of a waveform, or the columns of a trend that belong together. */
export interface MappingLine {
	/** Channels or columns that the line stands for. */
	indexes: number[];
	title: string;
	/** How the file describes it. */
	written: string;
	reason: string;
	quantity: '' | 'voltage' | 'current';
	phase: Phase | '';
	/** As typed: a factor or ratio, or what full scale means. */
	factor: string;
	reversed: boolean;
}

/** How the values of a capture become primary ones: by a transformer ratio, or by what full scale of its numbers means. */
export type Scaling = 'ratio' | 'full-scale';

/** Samples without a unit have to be calibrated; all others only need a ratio. */
export function scalingOf(format: string): Scaling {
	return format === 'WAV' ? 'full-scale' : 'ratio';
}

interface Suggested {
	channelIndex: number;
	mapping: { quantity: 'voltage' | 'current'; phase: Phase; toPrimary: number } | null;
	reason: string;
}
interface Described {
	name: string;
	unitAsWritten: string;
	phaseHint: Phase | null;
	quantity: string;
	valuesAre: string;
	ratio: { primary: number; secondary: number } | null;
}
interface Confirmed {
	quantity: 'voltage' | 'current';
	phase: Phase;
	toPrimary: number;
	/** What full scale means, as it was typed; only where that had to be stated. */
	fullScale?: string | undefined;
}

const SIDE = { primary: 'primary', secondary: 'secondary', unknown: 'side not stated' } as Record<
	string,
	string
>;

function describe(channel: Described): string {
	// Six figures: some recorders write the ratio's terms with the noise of their own arithmetic.
	const term = (value: number) => String(Number(value.toPrecision(6)));
	const ratio = channel.ratio
		? `, ratio ${term(channel.ratio.primary)}:${term(channel.ratio.secondary)}`
		: '';
	return `${channel.unitAsWritten || 'no unit'}, ${SIDE[channel.valuesAre] ?? ''}${ratio}`;
}

function lineOf(
	indexes: number[],
	title: string,
	written: string,
	reason: string,
	mapping: Confirmed | null,
	scaling: Scaling = 'ratio'
): MappingLine {
	const factor = mapping ? String(Number(Math.abs(mapping.toPrimary).toPrecision(12))) : '1';
	return {
		indexes,
		title,
		written,
		reason,
		quantity: mapping?.quantity ?? '',
		phase: mapping?.phase ?? '',
		factor: scaling === 'full-scale' ? (mapping?.fullScale ?? '') : factor,
		reversed: mapping !== null && mapping.toPrimary < 0
	};
}

/** A line per channel, as confirmed before, else as suggested. */
export function waveformLines(
	channels: readonly Described[],
	suggestions: readonly Suggested[],
	confirmed: readonly (Confirmed & { channelIndex: number })[] | null,
	scaling: Scaling = 'ratio'
): MappingLine[] {
	return channels.map((channel, index) => {
		const suggestion = suggestions.find((candidate) => candidate.channelIndex === index);
		const mapping = confirmed
			? (confirmed.find((candidate) => candidate.channelIndex === index) ?? null)
			: (suggestion?.mapping ?? null);
		const written = scaling === 'full-scale' ? 'no unit, in parts of full scale' : describe(channel);
		return lineOf([index], channel.name, written, suggestion?.reason ?? '', mapping, scaling);
	});
}

/** Columns of a trend by quantity and conductor: nobody maps fifty orders one by one. Frequency needs no mapping. */
export function trendLines(
	columns: readonly Described[],
	suggestions: readonly Suggested[],
	confirmed: readonly (Confirmed & { seriesIndex: number })[] | null
): MappingLine[] {
	const groups = new Map<string, number[]>();
	for (const [index, column] of columns.entries()) {
		if (column.unitAsWritten === 'Hz') continue;
		const key = `${column.quantity}/${column.phaseHint ?? 'none'}`;
		groups.set(key, [...(groups.get(key) ?? []), index]);
	}
	return [...groups.values()].map((indexes) => {
		const first = columns[indexes[0]!]!;
		const suggestion = suggestions.find((candidate) => indexes.includes(candidate.channelIndex));
		const mapping = confirmed
			? (confirmed.find((candidate) => indexes.includes(candidate.seriesIndex)) ?? null)
			: (suggestion?.mapping ?? null);
		const title = indexes.length === 1 ? first.name : `${first.name} and ${indexes.length - 1} more columns`;
		const written = [...new Set(indexes.map((index) => columns[index]!.unitAsWritten || 'no unit'))].join(
			', '
		);
		return lineOf(indexes, title, written, suggestion?.reason ?? '', mapping);
	});
}

/** What was typed, laid over the lines, so that nothing is lost when something has to be mended. */
export function typedLines(lines: readonly MappingLine[], form: FormData): MappingLine[] {
	const text = (name: string) => String(form.get(name) ?? '').trim();
	return lines.map((line, i) => {
		const quantity = text(`quantity_${i}`);
		const phase = text(`phase_${i}`);
		return {
			...line,
			quantity: quantity === 'voltage' || quantity === 'current' ? quantity : '',
			phase: PHASES.find((known) => known === phase) ?? '',
			factor: text(`factor_${i}`),
			reversed: form.get(`reversed_${i}`) !== null
		};
	});
}

/** "80", "400/5", "400:5" → factor; null when it is neither a number nor a ratio, or is not positive. */
export function parseFactor(text: string): number | null {
	const [primary, secondary, ...rest] = text.split(/[/:]/).map((part) => parseTypedNumber(part, '.'));
	if (rest.length > 0 || primary === undefined || primary === null) return null;
	if (secondary === null) return null;
	const factor = secondary === undefined ? primary : primary / secondary;
	return Number.isFinite(factor) && factor > 0 ? factor : null;
}

export interface MappingErrors {
	/** By line. */
	lines: Record<number, { phase?: string; factor?: string }>;
	/** About the whole form. */
	form: string;
	start: string;
}

interface Factor {
	toPrimary: number;
	fullScale?: string;
}

function readFactor({ quantity, factor: typed }: MappingLine, scaling: Scaling): Result<Factor, string> {
	if (scaling === 'ratio' || quantity === '') {
		const toPrimary = parseFactor(typed);
		return toPrimary === null
			? err('Enter a factor such as 80, or a ratio such as 400/5; 1 for primary values.')
			: ok({ toPrimary });
	}
	const example = quantity === 'voltage' ? '250 V or 6 kV' : '25 A or 1.2 kA';
	if (typed === '')
		return err(
			`Enter what full scale means, such as ${example}: without it the channel has no ${quantity} and cannot be analysed.`
		);
	const parsed = parseQuantity(quantity, typed);
	if (!parsed.ok) return parsed;
	if (parsed.value <= 0) return err(`Full scale must be above 0, such as ${example}.`);
	return ok({ toPrimary: parsed.value, fullScale: typed });
}

/** The mapping of each index of the lines in use, or what has to be mended. */
export function readLines(
	lines: readonly MappingLine[],
	names: PhaseNames,
	scaling: Scaling = 'ratio'
): { mappings: (Confirmed & { index: number })[]; errors: MappingErrors } {
	const errors: MappingErrors = { lines: {}, form: '', start: '' };
	const mappings: (Confirmed & { index: number })[] = [];
	const taken = new Map<string, string>();
	for (const [i, line] of lines.entries()) {
		const { quantity, phase } = line;
		if (quantity === '') continue;
		const factor = readFactor(line, scaling);
		if (phase === '') errors.lines[i] = { phase: 'Choose the conductor, or set the channel to not used.' };
		if (!factor.ok) errors.lines[i] = { ...errors.lines[i], factor: factor.problem };
		if (phase === '' || !factor.ok) continue;
		const key = `${quantity}/${phase}`;
		const twin = taken.get(key);
		if (twin !== undefined)
			errors.lines[i] = {
				phase: `The ${quantity} of ${formatPhase(phase, names)} is already taken from ${twin}. Choose another conductor, or set one of them to not used.`
			};
		taken.set(key, line.title);
		const { toPrimary, ...stated } = factor.value;
		const turned = line.reversed ? -toPrimary : toPrimary;
		for (const index of line.indexes) mappings.push({ index, quantity, phase, toPrimary: turned, ...stated });
	}
	if (mappings.length === 0 && Object.keys(errors.lines).length === 0)
		errors.form = 'Nothing is mapped. Say for at least one channel what it measures.';
	return { mappings, errors };
}

export function hasErrors(errors: MappingErrors): boolean {
	return Object.keys(errors.lines).length > 0 || errors.form !== '' || errors.start !== '';
}
