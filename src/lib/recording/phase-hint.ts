import { LINE_TO_LINE_PHASES, type Phase } from './phase';

/** What a file says about the conductor of a channel: its own field, and the channel's name. */
export interface PhaseText {
	field: string;
	name: string;
}

const PHASE_OF_LETTER: Record<string, 'L1' | 'L2' | 'L3'> = {
	A: 'L1',
	B: 'L2',
	C: 'L3',
	R: 'L1',
	S: 'L2',
	T: 'L3',
	'1': 'L1',
	'2': 'L2',
	'3': 'L3'
};

const PAIRS: Record<string, Phase> = { L1L2: 'L1L2', L2L3: 'L2L3', L3L1: 'L3L1' };

/** Conductor words: "L1", "AB", "R-N", "12", "L1L2", "N", "NG". Null where the word means no conductor. */
function phaseOfWord(word: string, letters: string): Phase | null {
	const plain = word.toUpperCase().replace(/[^A-Z0-9]/g, '');
	if (plain === 'N' || plain === 'NG' || plain === 'NE' || plain === 'NPE') return 'N';
	const match = new RegExp(`^L?([${letters}123])(?:L?([${letters}123]))?(N?)$`).exec(plain);
	if (match === null) return null;
	const first = PHASE_OF_LETTER[match[1] ?? ''];
	const second = match[2] === undefined ? undefined : PHASE_OF_LETTER[match[2]];
	if (first === undefined) return null;
	if (second === undefined) return first;
	if (match[3] === 'N') return null;
	return PAIRS[`${first}${second}`] ?? null;
}

/** A quantity letter followed at once by the conductor: "IA_G1", "U_L1", "Vab", "U12", "UL1-N", "Ib2". */
function phaseAfterQuantity(name: string, letters: string): Phase | null {
	const pattern = new RegExp(
		`^[UVIE](?:RMS)?[\\s_.-]*(L[123][\\s_-]?L[123]|L?[${letters}]{2}|L?[123]{2}|L[123]|[${letters}]|[123]|N)(?:[\\s_-]*[NG])?\\d*(?![A-Za-z])`,
		'i'
	);
	const match = pattern.exec(name.trim());
	return match === null ? null : phaseOfWord(match[1] ?? '', letters);
}

/** A conductor standing alone in the name: "Current A", "Voltage L1-N", "phase B". Two different ones tell nothing. */
function phaseAmongWords(name: string, letters: string): Phase | null {
	const words = name.split(/[\s_.,:;()[\]/-]+/).filter((word) => word !== '');
	const found = new Set<Phase>();
	for (const word of words) {
		if (/^\d+$/.test(word)) continue;
		const phase = phaseOfWord(word, letters);
		if (phase !== null) found.add(phase);
	}
	if (found.size === 2 && found.has('N')) found.delete('N');
	const [only] = found;
	return found.size === 1 && only !== undefined ? only : null;
}

/** Residual current (three times the zero sequence) flows in the neutral of a four-wire system. */
function isResidualCurrent(name: string): boolean {
	return /^3\s*I\s*[0o]/i.test(name.trim());
}

/** R, S, T name conductors only where the file does not use A, B, C: a lone "S" or "T" means something else there. */
function lettersInUse(channels: readonly PhaseText[]): string {
	const usesAbc = channels.some(
		({ field, name }) => /^[ABC](?:[ABC]|-?N)?$/i.test(field.trim()) || phaseAfterQuantity(name, 'ABC')
	);
	if (usesAbc) return 'ABC';
	const fields = channels.map(({ field, name }) => `${field.trim()} ${name}`.toUpperCase());
	const usesRst = ['R', 'S', 'T'].every((letter) =>
		fields.some((text) => new RegExp(`(^|[^A-Z])[UVI]?_?${letter}([^A-Z]|$)`).test(text))
	);
	return usesRst ? 'RST' : 'ABC';
}

/**
 * The conductor of each channel, judged over the whole file: the file's own phase field first where it is a
 * word, then the name, then a phase field that is only a digit. Null where neither tells.
 */
export function phaseHints(channels: readonly PhaseText[]): (Phase | null)[] {
	const letters = lettersInUse(channels);
	return channels.map(({ field, name }) => {
		if (isResidualCurrent(name)) return 'N';
		const fromField = /^\s*\d/.test(field) ? null : phaseOfWord(field, letters);
		const fromName = phaseAfterQuantity(name, letters) ?? phaseAmongWords(name, letters);
		// Some recorders write one conductor in the field of a line-to-line voltage; the name then says both.
		if (fromName !== null && isPair(fromName)) return fromName;
		return fromField ?? fromName ?? distinctDigit(field, channels);
	});
}

function isPair(phase: Phase): boolean {
	return (LINE_TO_LINE_PHASES as readonly Phase[]).includes(phase);
}

/** A digit field means a conductor only where channels differ in it; recorders also write one feeder number everywhere. */
function distinctDigit(field: string, channels: readonly PhaseText[]): Phase | null {
	const isConductor = /^[123]$/.test(field.trim()) && channels.some((c) => c.field.trim() !== field.trim());
	return isConductor ? (PHASE_OF_LETTER[field.trim()] ?? null) : null;
}
