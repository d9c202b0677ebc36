import type { Evidence, Verdict } from './assessment';

/** The four marks; a verdict is never told by colour alone: a mark, a word and a colour together. */
export type VerdictMarkShape = 'disc' | 'half-disc' | 'triangle' | 'ring';

/** Palette name that belongs to a verdict. */
export type VerdictTone = 'verdigris' | 'ochre' | 'oxide' | 'slate';

export interface VerdictWording {
	shape: VerdictMarkShape;
	/** The mark as a character, for plain text. */
	sign: '●' | '◐' | '▲' | '○';
	word: string;
	/** Where the column is narrow and the side of the limit is shown beside it. */
	shortWord: string;
	tone: VerdictTone;
}

export const VERDICT_WORDS: Record<Verdict, VerdictWording> = {
	compliant: { shape: 'disc', sign: '●', word: 'compliant', shortWord: 'compliant', tone: 'verdigris' },
	'compliant-inside-uncertainty': {
		shape: 'half-disc',
		sign: '◐',
		word: 'compliant, inside uncertainty',
		shortWord: 'inside uncertainty',
		tone: 'ochre'
	},
	'exceeds-inside-uncertainty': {
		shape: 'half-disc',
		sign: '◐',
		word: 'exceeds, inside uncertainty',
		shortWord: 'exceeds, inside uncertainty',
		tone: 'ochre'
	},
	exceeds: { shape: 'triangle', sign: '▲', word: 'exceeds', shortWord: 'exceeds', tone: 'oxide' },
	'not-assessed': {
		shape: 'ring',
		sign: '○',
		word: 'not assessed',
		shortWord: 'not assessed',
		tone: 'slate'
	}
};

export const EVIDENCE_WORDS: Record<Evidence, { word: string; meaning: string }> = {
	weekly: { word: 'weekly', meaning: 'everything the rule asks for was measured' },
	partial: { word: 'partial', meaning: 'part of the period the rule asks for was measured' },
	snapshot: { word: 'snapshot', meaning: 'too short for any percentile: indicative only' }
};
