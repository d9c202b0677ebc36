import { Transform, type Readable, type TransformCallback } from 'node:stream';
import { crc32 } from 'node:zlib';
import { openPromise, type Entry, type ZipFile } from 'yauzl';

/** How much an archive may unfold into, whatever it says of itself. */
export interface ArchiveLimits {
	entries: number;
	/** Of one file, and of all together. */
	entry_bytes: number;
	total_bytes: number;
}

/** A file of the archive that is no capture's, with the sentence that says so. */
export interface LeftOut {
	name: string;
	sentence: string;
}

/** The archive cannot be unpacked; `message` is a sentence for the person who sent it. */
export class ArchiveRefused extends Error {}

/** Leftovers of file managers (common practice): not worth a sentence. */
const LITTER = /(^|\/)(__MACOSX\/|\.DS_Store$|Thumbs\.db$|desktop\.ini$)/i;
const ENCRYPTED = 1;
const SYMBOLIC_LINK = 0o120000;

export function looksLikeArchive(head: Uint8Array): boolean {
	return head[0] === 0x50 && head[1] === 0x4b && head[2] === 3 && head[3] === 4;
}

/**
 * Unpacks a ZIP file one entry after the other; `take` is given each file and must read it to its end before it resolves.
 * Folders are walked through, archives within are not opened. What an entry announces bounds what it may unfold into, and
 * its CRC is checked, so `take` must store nothing for good before it has seen the end.
 * Throws ArchiveRefused with a sentence.
 */
export async function unpackArchive(
	path: string,
	name: string,
	limits: ArchiveLimits,
	take: (entryName: string, size_bytes: number, content: Readable) => Promise<void>
): Promise<LeftOut[]> {
	const archive = await openPromise(path, { lazyEntries: true, autoClose: false }).catch((cause: Error) => {
		throw new ArchiveRefused(
			`${name} cannot be unpacked: its list of contents, expected at the end of the file, is damaged (${cause.message}). Pack the files again.`
		);
	});
	try {
		if (archive.entryCount > limits.entries)
			throw new ArchiveRefused(
				`${name} holds ${archive.entryCount} files; at most ${limits.entries} are taken at once. Pack the recorder's files alone, or send them in several archives.`
			);
		return await unpackEntries(archive, name, limits, take);
	} finally {
		archive.close();
	}
}

async function unpackEntries(
	archive: ZipFile,
	name: string,
	limits: ArchiveLimits,
	take: (entryName: string, size_bytes: number, content: Readable) => Promise<void>
): Promise<LeftOut[]> {
	const leftOut: LeftOut[] = [];
	let total_bytes = 0;
	for await (const entry of entriesOf(archive, name)) {
		if (entry.fileName.endsWith('/') || LITTER.test(entry.fileName)) continue;
		const reason = reasonToLeave(entry);
		if (reason !== null) {
			leftOut.push({ name: entry.fileName, sentence: `${entry.fileName} in ${name} ${reason}` });
			continue;
		}
		total_bytes += entry.uncompressedSize;
		if (entry.uncompressedSize > limits.entry_bytes || total_bytes > limits.total_bytes)
			throw new ArchiveRefused(
				`${name} unfolds into more than this installation takes (${entry.fileName} has ${megabytes(entry.uncompressedSize)}, at most ${megabytes(limits.entry_bytes)} a file and ${megabytes(limits.total_bytes)} together). Send the recorder's files themselves.`
			);
		await unpackEntry(archive, name, entry, take);
	}
	return leftOut;
}

async function unpackEntry(
	archive: ZipFile,
	name: string,
	entry: Entry,
	take: (entryName: string, size_bytes: number, content: Readable) => Promise<void>
): Promise<void> {
	try {
		const packed = await archive.openReadStreamPromise(entry);
		const checked = new CrcCheck(entry.crc32);
		packed.on('error', (cause) => checked.destroy(cause));
		// The content of a file that could not be taken is not read to its end.
		checked.on('close', () => packed.destroy());
		await take(entry.fileName, entry.uncompressedSize, packed.pipe(checked));
	} catch (cause) {
		if (!(cause instanceof Error) || !isDamage(cause)) throw cause;
		throw new ArchiveRefused(
			`${name} is damaged at ${entry.fileName}: its packed content does not give what the list of contents announces. Pack the files again.`
		);
	}
}

/** Entries in their order; a damaged list ends with a sentence. */
async function* entriesOf(archive: ZipFile, name: string): AsyncGenerator<Entry> {
	try {
		yield* archive.eachEntry();
	} catch (cause) {
		if (cause instanceof ArchiveRefused || !isDamage(cause as Error)) throw cause;
		throw new ArchiveRefused(
			`${name} cannot be unpacked: its list of contents is damaged or leads out of the archive (${(cause as Error).message}). Pack the files again.`
		);
	}
}

function reasonToLeave(entry: Entry): string | null {
	if ((entry.generalPurposeBitFlag & ENCRYPTED) !== 0)
		return 'is locked with a password. Unpack it and send the files themselves.';
	if (((entry.externalFileAttributes >>> 16) & 0o170000) === SYMBOLIC_LINK)
		return 'is a link to another file. Send that file itself.';
	if (/\.(zip|gz|7z|rar|tar)$/i.test(entry.fileName))
		return 'is an archive within the archive. Unpack it and send the files themselves.';
	if (entry.uncompressedSize === 0) return 'is empty. Copy it from the recorder again.';
	return null;
}

class WrongContent extends Error {}

/** Passes bytes on and fails at their end when their CRC-32 is not the announced one. */
class CrcCheck extends Transform {
	#crc = 0;
	constructor(private readonly announced: number) {
		super();
	}
	override _transform(chunk: Buffer, _encoding: BufferEncoding, done: TransformCallback): void {
		this.#crc = crc32(chunk, this.#crc);
		done(null, chunk);
	}
	override _flush(done: TransformCallback): void {
		done(this.#crc === this.announced ? null : new WrongContent('CRC-32 differs'));
	}
}

/** Errors of the unpacking itself, as against those of whoever takes the content. */
function isDamage(cause: Error & { code?: string }): boolean {
	if (cause instanceof WrongContent || cause.code?.startsWith('Z_')) return true;
	// yauzl marks none of its errors; those of the file system have a code.
	return cause.code === undefined && cause.constructor === Error;
}

function megabytes(size_bytes: number): string {
	return `${Math.ceil(size_bytes / 1024 / 1024)} MB`;
}
