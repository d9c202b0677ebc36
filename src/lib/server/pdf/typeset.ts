import type { Content, ContentTable, CustomTableLayout, TableCell } from 'pdfmake/interfaces';
import type { Verdict } from '../../assessment/assessment';
import { VERDICT_WORDS, type VerdictMarkShape } from '../../assessment/verdict-words';
import { parseRichSymbols } from '../../units/rich-symbol';
import { INK, INK_SOFT, MARGIN, RULE, TONE } from './print-style';

/** Text runs in which I_L and its like stand with their subscript. */
export function rich(text: string): Content[] {
	return parseRichSymbols(text).flatMap((part): Content[] =>
		part.kind === 'text' ? [{ text: part.text }] : [{ text: part.name }, { text: part.sub, sub: true }]
	);
}

/**
 * Text in the fixed-width face, its spaces in the other one: the spaces of the fixed-width files lie behind their
 * last outline, where the font reader cannot measure them.
 */
export function figures(text: string): Content[] {
	return text
		.split(/([\s\u00a0]+)/)
		.filter((part) => part !== '')
		.map((part) => (/^[\s\u00a0]/.test(part) ? { text: part } : { text: part, font: 'IBM Plex Mono' }));
}

/** pdfmake writes into what it is given, so each call makes a fresh node. */
export function paragraph(text: string, style: Record<string, unknown> = {}): Content {
	return { text: rich(text), margin: [0, 0, 0, 6], ...style };
}

export function paragraphs(text: string, style: Record<string, unknown> = {}): Content[] {
	return text
		.split(/\n\s*\n/)
		.map((part) => part.trim())
		.filter((part) => part !== '')
		.map((part) => paragraph(part.replace(/\s*\n\s*/g, ' '), style));
}

export function heading(text: string, note?: string): Content[] {
	const head: Content = {
		text: rich(text),
		bold: true,
		fontSize: 11,
		margin: [0, 10, 0, note ? 1 : 5],
		headlineLevel: 2
	};
	return note ? [head, { text: rich(note), color: INK_SOFT, fontSize: 8.5, margin: [0, 0, 0, 6] }] : [head];
}

export function soft(text: string, style: Record<string, unknown> = {}): Content {
	return { text: rich(text), color: INK_SOFT, fontSize: 8.5, margin: [0, 0, 0, 6], ...style };
}

/** The faces have no ● ◐ ▲ ○: the marks are drawn. */
export function markSvg(shape: VerdictMarkShape, colour: string, size: number): Content {
	const body: Record<VerdictMarkShape, string> = {
		disc: `<circle cx="5" cy="5" r="4.5" fill="${colour}"/>`,
		triangle: `<path d="M5 0.3 9.9 9.4H.1Z" fill="${colour}"/>`,
		ring: `<circle cx="5" cy="5" r="4" fill="none" stroke="${colour}" stroke-width="1.4"/>`,
		'half-disc': `<circle cx="5" cy="5" r="4" fill="none" stroke="${colour}" stroke-width="1.4"/><path d="M5 1a4 4 0 0 0 0 8Z" fill="${colour}"/>`
	};
	return {
		svg: `<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 10 10" width="${size}" height="${size}">${body[shape]}</svg>`,
		width: size
	};
}

const NO_LINES: CustomTableLayout = {
	hLineWidth: () => 0,
	vLineWidth: () => 0,
	paddingLeft: () => 0,
	paddingRight: () => 0,
	paddingTop: () => 0,
	paddingBottom: () => 0
};

/** Mark and word on the verdict's tint, as on screen. */
export function verdictTag(
	verdict: Verdict,
	options: { size?: number; advisory?: boolean } = {}
): ContentTable {
	const words = VERDICT_WORDS[verdict];
	const { text, tint } = TONE[words.tone];
	const size = options.size ?? 7.5;
	const word = options.advisory ? `${words.word} (advisory)` : words.word;
	const mark = markSvg(words.shape, text, size * 0.72);
	return {
		table: {
			widths: [size * 0.8, 'auto'],
			body: [
				[
					{
						...(mark as object),
						margin: [0, size * 0.31, 0, 0],
						border: [false, false, false, false]
					} as TableCell,
					{ text: word, color: text, bold: true, fontSize: size, noWrap: true }
				]
			]
		},
		layout: {
			...NO_LINES,
			fillColor: () => tint,
			paddingLeft: (column) => (column === 0 ? size * 0.6 : size * 0.35),
			paddingRight: (column) => (column === 0 ? 0 : size * 0.7),
			paddingTop: () => size * 0.12,
			paddingBottom: () => size * 0.16
		}
	};
}

export interface Column {
	head: string;
	width: number | string;
	align?: 'left' | 'right';
	mono?: boolean;
}

/** Ruled table: one ink line under the head, hairlines between rows; the head is repeated on each page. */
export function ruledTable(
	columns: readonly Column[],
	rows: readonly (readonly (string | Content)[])[],
	options: {
		wash?: (row: number) => string | null;
		fontSize?: number;
		margin?: [number, number, number, number];
	} = {}
): Content {
	const size = options.fontSize ?? 8;
	const head = columns.map((column): TableCell => ({
		text: rich(column.head),
		color: INK_SOFT,
		fontSize: 7.5,
		alignment: column.align ?? 'left'
	}));
	const body = rows.map((cells) =>
		cells.map((cell, i): TableCell => {
			if (typeof cell !== 'string') return cell as TableCell;
			const column = columns[i];
			return {
				text: column?.mono ? figures(cell) : rich(cell),
				alignment: column?.align ?? 'left',
				fontSize: size,
				...(column?.mono ? { fontSize: size - 0.3 } : {})
			};
		})
	);
	return {
		table: {
			headerRows: 1,
			dontBreakRows: true,
			keepWithHeaderRows: 1,
			widths: columns.map((c) => c.width),
			body: [head, ...body]
		},
		margin: options.margin ?? [0, 0, 0, 10],
		layout: {
			hLineWidth: (i) => (i === 0 ? 0 : i === 1 ? 0.9 : 0.4),
			vLineWidth: () => 0,
			hLineColor: (i) => (i === 1 ? INK : RULE),
			fillColor: (row) => (row > 0 ? (options.wash?.(row - 1) ?? null) : null),
			paddingLeft: () => 4,
			paddingRight: () => 4,
			paddingTop: () => 2.4,
			paddingBottom: () => 2.4
		}
	};
}

/** Term and value in two columns. */
export function facts(items: readonly (readonly [string, string | Content])[], termWidth = 150): Content {
	return {
		table: {
			widths: [termWidth, '*'],
			body: items.map(([term, value]): TableCell[] => [
				{ text: rich(term), color: INK_SOFT, fontSize: 8.5 },
				typeof value === 'string' ? { text: rich(value), fontSize: 9 } : (value as TableCell)
			])
		},
		margin: [0, 0, 0, 10],
		layout: {
			hLineWidth: (i) => (i === 0 ? 0 : 0.4),
			vLineWidth: () => 0,
			hLineColor: () => RULE,
			paddingLeft: (column) => (column === 0 ? 0 : 8),
			paddingRight: () => 0,
			paddingTop: () => 2.6,
			paddingBottom: () => 2.6
		}
	};
}

export function bullets(items: readonly string[], fontSize = 9.5): Content {
	return {
		ul: items.map((item) => ({ text: rich(item), fontSize, margin: [0, 0, 0, fontSize < 9 ? 1 : 3] })),
		margin: [0, 0, 0, 8],
		markerColor: INK_SOFT
	};
}

export const SIDE: [number, number] = [MARGIN, MARGIN];
