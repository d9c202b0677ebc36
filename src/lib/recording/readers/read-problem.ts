import { err } from '../../result';
import type { ReadProblem, ReadRemark } from '../recording';

/** A refusal. The sentence must name the file and the place by itself: it is often shown alone. */
export function refuse(
	code: string,
	file: string,
	place: string | null,
	sentence: string
): { ok: false; problem: ReadProblem } {
	return err({ code, file, place, sentence });
}

export function note(code: string, sentence: string): ReadRemark {
	return { severity: 'note', code, sentence };
}

export function warning(code: string, sentence: string): ReadRemark {
	return { severity: 'warning', code, sentence };
}

/** "1 sample", "3 samples". */
export function counted(count: number, noun: string): string {
	return `${count} ${noun}${count === 1 ? '' : 's'}`;
}

/** Text of a file as people may see it: control characters, which only damage puts there, are blanks. */
export function withoutControls(text: string): string {
	// eslint-disable-next-line no-control-regex -- control characters are what is taken out
	return text.replace(/[\u0000-\u001f\u007f]+/g, ' ').trim();
}

/** What was found, fit for a sentence: quoted, control characters shown as blanks, cut after 40 characters. */
export function quoted(text: string): string {
	const plain = withoutControls(text);
	return plain === '' ? 'nothing' : `“${plain.length > 40 ? `${plain.slice(0, 40)}…` : plain}”`;
}
