import { groupCaptureFiles, incompleteGroupSentence } from './group-capture-files';
import { looksLikeCfg } from './readers/comtrade/comtrade-files';
import { rowLengthOf } from './readers/comtrade/row-length';

/** A file of a lot with enough of its beginning to tell what it is. */
export interface CandidateFile {
	name: string;
	size_bytes: number;
	head: Uint8Array;
}

/** Files that make one capture, the leading one first. */
export interface CaptureSet<File> {
	files: File[];
	/** What is still missing, as a sentence; null where the set can be read. */
	incomplete: string | null;
}

/**
 * Which files of a lot make one capture: first by their names (`groupCaptureFiles`), then by what they hold. A
 * configuration whose data file was renamed, or that goes by another name itself, finds it where exactly one of the files
 * left over has the length that its rows demand.
 */
export function pairByContent<File extends CandidateFile>(files: readonly File[]): CaptureSet<File>[] {
	const waiting = [...files];
	const byName = groupCaptureFiles(files.map(({ name }) => name)).map((names) =>
		names.flatMap((name) => {
			const at = waiting.findIndex((file) => file.name === name);
			return at < 0 ? [] : waiting.splice(at, 1);
		})
	);
	const missing = (set: File[]) => incompleteGroupSentence(set.map(({ name }) => name));
	const isOpen = (set: File[]): boolean =>
		missing(set) !== null || (set.length === 1 && looksLikeCfg(set[0]!.head));
	const settled = byName.filter((set) => !isOpen(set));
	let open = byName.filter(isOpen);
	for (const set of [...open]) {
		const configuration = set.find(({ head }) => looksLikeCfg(head));
		if (!configuration || set.some((file) => file !== configuration && !isNotes(file))) continue;
		const waitsForIt = (other: File[]) =>
			other !== set && other.length === 1 && fits(configuration, other[0]!);
		const fitting = [...open, ...settled].filter(waitsForIt);
		if (fitting.length !== 1) continue;
		const [data] = fitting[0]!;
		settled.splice(0, settled.length, ...settled.filter((other) => other !== fitting[0]));
		open = open.filter((other) => other !== set && other !== fitting[0]);
		settled.push([configuration, data!, ...set.filter((file) => file !== configuration)]);
	}
	return [
		...settled.map((set) => ({ files: set, incomplete: null })),
		...open.map((set) => ({
			files: set,
			incomplete:
				missing(set) ??
				`${set[0]!.name} is a COMTRADE configuration; its data file was expected beside it, with the same name or of the length that it describes. Add it.`
		}))
	];
}

function isNotes({ name }: CandidateFile): boolean {
	return /\.(hdr|inf)$/i.test(name);
}

/** Whole rows of the configuration's length, give or take nothing; text has no fixed length and fits by its first row. */
function fits(configuration: CandidateFile, data: CandidateFile): boolean {
	if (looksLikeCfg(data.head)) return false;
	const row = rowLengthOf(configuration.head);
	if (row === null) return false;
	if (row.kind === 'binary') return data.size_bytes > 0 && data.size_bytes % row.bytes === 0;
	const first = new TextDecoder('windows-1252').decode(data.head).split(/\r\n|\n|\r/)[0] ?? '';
	return /^[\s\d+\-.,eE]+$/.test(first) && first.split(',').length === row.fields;
}
