import type { VerdictTone } from '../../assessment/verdict-words';

/** The light palette of src/app.css as plain figures: a PDF knows no CSS variables. */
export const INK = '#17202B';
export const INK_SOFT = '#4B5766';
export const RULE = '#DCD5C7';
export const COPPER = '#A24A21';
export const PAPER = '#F6F3EC';

export const TONE: Record<VerdictTone, { text: string; tint: string }> = {
	verdigris: { text: '#1E7263', tint: '#DDEEEA' },
	ochre: { text: '#7F5600', tint: '#F6EAD0' },
	oxide: { text: '#A5231C', tint: '#F7DEDB' },
	slate: { text: '#566474', tint: '#E6EAEE' }
};
export const OXIDE_WASH = '#FDF1EF';

/** Points. The sheet's side margins; header and foot have their own. */
export const MARGIN = 44;
export const TOP = 78;
export const BOTTOM = 78;

export const PAPER_SIZE = {
	A4: { width: 595.28, height: 841.89 },
	LETTER: { width: 612, height: 792 }
} as const;

export function contentWidth(paper: 'A4' | 'LETTER'): number {
	return PAPER_SIZE[paper].width - 2 * MARGIN;
}
