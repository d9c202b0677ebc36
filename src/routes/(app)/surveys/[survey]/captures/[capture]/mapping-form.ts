import { formatPhase, PHASES, type Phase, type PhaseNames } from '$lib/recording/phase';
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
	factor: string;
	reversed: boolean;
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
type Confirmed = { quantity: 'voltage' | 'current'; phase: Phase; toPrimary: number };

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
	mapping: Confirmed | null
): MappingLine {
	return {
		indexes,
		title,
		written,
		reason,
		quantity: mapping?.quantity ?? '',
		phase: mapping?.phase ?? '',
		factor: mapping ? String(Number(Math.abs(mapping.toPrimary).toPrecision(12))) : '1',
		reversed: mapping !== null && mapping.toPrimary < 0
	};
}

/** A line per channel, as confirmed before, else as suggested. */
export function waveformLines(
	channels: readonly Described[],
	suggestions: readonly Suggested[],
	confirmed: readonly (Confirmed & { channelIndex: number })[] | null
): MappingLine[] {
	return channels.map((channel, index) => {
		const suggestion = suggestions.find((candidate) => candidate.channelIndex === index);
		const mapping = confirmed
			? (confirmed.find((candidate) => candidate.channelIndex === index) ?? null)
			: (suggestion?.mapping ?? null);
		return lineOf([index], channel.name, describe(channel), suggestion?.reason ?? '', mapping);
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

/** The mapping of each index of the lines in use, or what has to be mended. */
export function readLines(
	lines: readonly MappingLine[],
	names: PhaseNames
): { mappings: (Confirmed & { index: number })[]; errors: MappingErrors } {
	const errors: MappingErrors = { lines: {}, form: '', start: '' };
	const mappings: (Confirmed & { index: number })[] = [];
	const taken = new Map<string, string>();
	for (const [i, line] of lines.entries()) {
		const { quantity, phase } = line;
		if (quantity === '') continue;
		const factor = parseFactor(line.factor);
		if (phase === '') errors.lines[i] = { phase: 'Choose the conductor, or set the channel to not used.' };
		if (factor === null)
			errors.lines[i] = {
				...errors.lines[i],
				factor: 'Enter a factor such as 80, or a ratio such as 400/5; 1 for primary values.'
			};
		if (phase === '' || factor === null) continue;
		const key = `${quantity}/${phase}`;
		const twin = taken.get(key);
		if (twin !== undefined)
			errors.lines[i] = {
				phase: `The ${quantity} of ${formatPhase(phase, names)} is already taken from ${twin}. Choose another conductor, or set one of them to not used.`
			};
		taken.set(key, line.title);
		const toPrimary = line.reversed ? -factor : factor;
		for (const index of line.indexes) mappings.push({ index, quantity, phase, toPrimary });
	}
	if (mappings.length === 0 && Object.keys(errors.lines).length === 0)
		errors.form = 'Nothing is mapped. Say for at least one channel what it measures.';
	return { mappings, errors };
}

export function hasErrors(errors: MappingErrors): boolean {
	return Object.keys(errors.lines).length > 0 || errors.form !== '' || errors.start !== '';
}
