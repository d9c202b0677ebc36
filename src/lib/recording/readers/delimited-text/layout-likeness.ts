import type { ToldColumn, ToldLayout } from './table-layout-told';

/** Headings and layout of a table told before, as a template keeps them. */
export interface KnownLayout {
	/** [columns] as written; all empty for a table without headings. */
	headings: readonly string[];
	layout: ToldLayout;
}

/** Alike enough to be applied without being asked: the same columns in the same order, one in fifty aside. */
export const APPLIED_FROM = 0.98;
/**
 * Alike enough to be offered: three columns in five. A recorder that was set to log other quantities keeps its time and
 * flag columns and some of the rest; tables of two makers share a “Time” and seldom more than a third.
 */
export const OFFERED_FROM = 0.6;

/** "U_L1 H05 [%]" and "u l1 h5 (%)" are one heading: letters, figures without leading zeros, signs of a unit. */
export function normalisedHeading(heading: string): string {
	return heading
		.normalize('NFKD')
		.replace(/\p{M}/gu, '')
		.toLowerCase()
		.replace(/[^\p{L}\p{N}%°]+/gu, ' ')
		.replace(/(\p{L})(\p{N})/gu, '$1 $2')
		.replace(/(\p{N})(\p{L})/gu, '$1 $2')
		.replace(/\b0+(\d)/g, '$1')
		.trim();
}

/**
 * Likeness of two rows of headings, 0 to 1: twice the headings in common over the headings of both (Dice's coefficient of
 * the two multisets), a tenth of it for standing in the same column. Without headings on either side only the number of
 * columns can agree, which is worth an offer and no more.
 */
export function headingLikeness(one: readonly string[], other: readonly string[]): number {
	const a = one.map(normalisedHeading);
	const b = other.map(normalisedHeading);
	const isBare = (headings: string[]) => headings.every((heading) => heading === '');
	if (isBare(a) || isBare(b)) return isBare(a) && isBare(b) && a.length === b.length ? OFFERED_FROM : 0;
	const left = new Map<string, number>();
	for (const heading of a) left.set(heading, (left.get(heading) ?? 0) + 1);
	let common = 0;
	for (const heading of b) {
		const count = left.get(heading) ?? 0;
		if (count === 0) continue;
		left.set(heading, count - 1);
		common++;
	}
	const inPlace = a.filter((heading, column) => heading === b[column]).length;
	const share = (2 * common) / (a.length + b.length);
	return 0.9 * share + (0.1 * inPlace) / Math.max(a.length, b.length);
}

/**
 * A known layout for another table with (nearly) the same headings.
 * headings  [columns] of the new table
 * lines     of the new table's own guess: preambles differ in length from file to file
 * returns   the known writing and times; each column as the column of the same heading was told, ignored where none had it.
 *           The moment of a first row is that file's own and is not carried over
 */
export function fitLayout(
	{ headings: known, layout }: KnownLayout,
	headings: readonly string[],
	lines: Pick<ToldLayout, 'headingLines' | 'unitsLine' | 'firstDataLine'>
): ToldLayout {
	const left = known.map((heading, index) => ({
		heading: normalisedHeading(heading),
		index,
		isTaken: false
	}));
	const columns = headings.map((heading, index): ToldColumn => {
		const wanted = normalisedHeading(heading);
		const isFree = (one: (typeof left)[number] | undefined) =>
			one !== undefined && !one.isTaken && one.heading === wanted;
		const match = isFree(left[index]) ? left[index] : left.find(isFree);
		if (match === undefined) return { role: 'ignore' };
		match.isTaken = true;
		return layout.columns[match.index] ?? { role: 'ignore' };
	});
	const { headingLines, unitsLine, firstDataLine } = lines;
	return {
		...layout,
		headingLines,
		unitsLine,
		firstDataLine,
		columns,
		time: { ...layout.time, start: null }
	};
}

export interface LikelyTemplate<T extends KnownLayout> {
	template: T;
	likeness: number;
}

/** Templates worth offering for a table, the likest first. */
export function likelyTemplates<T extends KnownLayout>(
	templates: readonly T[],
	headings: readonly string[]
): LikelyTemplate<T>[] {
	return templates
		.map((template) => ({ template, likeness: headingLikeness(template.headings, headings) }))
		.filter(({ likeness }) => likeness >= OFFERED_FROM)
		.sort((one, other) => other.likeness - one.likeness);
}
