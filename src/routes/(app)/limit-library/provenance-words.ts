import type { Provenance } from '$lib/limits/limit-set';

/** How far a figure of the library can be trusted, as it is told to the reader. */
export const PROVENANCE_WORDS: Record<Provenance, { word: string; meaning: string }> = {
	'cross-checked': { word: 'cross-checked', meaning: 'found alike in at least two public documents' },
	'single-source': { word: 'single source', meaning: 'found in one public document' },
	'from-memory': { word: 'from memory', meaning: 'recalled, no public document found' },
	own: { word: 'own', meaning: 'entered by the practice' }
};
