import type { CaptureHandle } from '../../capture-handle';
import type { ReadRemark } from '../../recording';
import { counted, warning } from '../read-problem';
import { bodyOf, guidAt, type Body } from './elements';
import { adler32, crc32 } from './checksums';
import { SIGNATURE } from './pqdif-ids';
import { unpack } from './unpack';

/** Header of one record (IEEE Std 1159.3, physical layer). */
export interface RecordHeader {
	type: string;
	/** Where the header begins in the file. */
	at: number;
	bodyAt: number;
	/** Size of the body as stored. */
	stored_bytes: number;
	checksum: number;
}

export const HEADER_BYTES = 64;
/** More than any recorder writes into one record; an observation is decoded as a whole. */
const MOST_BODY_BYTES = 128 * 2 ** 20;
/** Unpacked bytes over a whole file: this many to begin with, and so many times its size. */
const MOST_UNPACKED_BYTES = 256 * 2 ** 20;
const MOST_GROWTH = 100;
const MOST_RECORDS = 1_000_000;

/** The first bytes of every PQDIF file, as far as they tell it from others. */
export function looksLikePqdif(file: CaptureHandle): boolean {
	if (file.size_bytes < HEADER_BYTES) return false;
	const head = new Uint8Array(16);
	file.read(0, head);
	return guidAt(head, 0) === SIGNATURE;
}

/** The records of a file, one after the other, with what was found wrong on the way. */
export class RecordChain {
	/** Records whose checksum does not fit their bytes. */
	private wrongChecksums = { count: 0, firstAt: 0 };
	private unpackedLeft: number;

	constructor(
		private readonly file: CaptureHandle,
		private readonly remarks: ReadRemark[]
	) {
		this.unpackedLeft = MOST_UNPACKED_BYTES + MOST_GROWTH * file.size_bytes;
	}

	/** Headers in the order of their links, from `at` on; ends with a remark where a link leads nowhere. */
	*headers(at = 0): Generator<RecordHeader> {
		const { file } = this;
		const seen = new Set<number>();
		const bytes = new Uint8Array(HEADER_BYTES);
		const view = new DataView(bytes.buffer);
		for (let from = -1; ;) {
			if (at + HEADER_BYTES > file.size_bytes) {
				this.remarks.push(
					warning(
						'pqdif-truncated',
						`${file.name} ends at byte ${file.size_bytes}, but the record at byte ${from} says that another one begins at byte ${at}; it and everything after it is missing. What stands before was read.`
					)
				);
				return;
			}
			file.read(at, bytes);
			if (guidAt(bytes, 0) !== SIGNATURE) {
				this.remarks.push(
					warning(
						'pqdif-record-unreadable',
						`${file.name}, byte ${at}: the mark of a record was expected, but other bytes stand there; everything from there on was left out.`
					)
				);
				return;
			}
			seen.add(at);
			const headerSize = view.getInt32(32, true);
			const stored_bytes = view.getInt32(36, true);
			const bodyAt = at + Math.max(HEADER_BYTES, headerSize);
			if (headerSize < 0 || headerSize > 4096 || stored_bytes < 0) {
				this.remarks.push(
					warning(
						'pqdif-record-unreadable',
						`${file.name}, byte ${at + 32}: a record of ${stored_bytes} bytes after a header of ${headerSize} is announced, which cannot be; everything from there on was left out.`
					)
				);
				return;
			}
			if (bodyAt + stored_bytes > file.size_bytes) {
				const missing = bodyAt + stored_bytes - file.size_bytes;
				this.remarks.push(
					warning(
						'pqdif-truncated',
						`${file.name} ends at byte ${file.size_bytes}, in the middle of the record at byte ${at}: ${counted(missing, 'byte')} of its ${stored_bytes} are missing, and all records after it. What stands before was read.`
					)
				);
				return;
			}
			yield {
				type: guidAt(bytes, 16),
				at,
				bodyAt,
				stored_bytes,
				checksum: view.getUint32(44, true)
			};
			const next = view.getInt32(40, true) >>> 0;
			if (next === 0) return;
			if (seen.has(next) || seen.size >= MOST_RECORDS) {
				this.remarks.push(
					warning(
						'pqdif-link-circle',
						`${file.name}, byte ${at + 40}: the record points back to byte ${next}, which was read already; the chain of records was ended there.`
					)
				);
				return;
			}
			from = at;
			at = next;
		}
	}

	/** The body of a record, unpacked where it is packed; null, with a remark, where it cannot be had. */
	body(header: RecordHeader, isPacked: boolean): Body | null {
		const { name } = this.file;
		if (header.stored_bytes > MOST_BODY_BYTES) {
			this.leaveOut(
				header,
				`holds ${header.stored_bytes} bytes; at most ${MOST_BODY_BYTES} are read in one record`
			);
			return null;
		}
		const stored = new Uint8Array(header.stored_bytes);
		this.file.read(header.bodyAt, stored);
		if (!isPacked) {
			this.check(header, stored, null);
			return bodyOf(stored);
		}
		const unpacked = unpack(stored, Math.min(MOST_BODY_BYTES, this.unpackedLeft));
		if (unpacked.kind === 'too-large') {
			this.leaveOut(
				header,
				`grows beyond ${Math.min(MOST_BODY_BYTES, this.unpackedLeft)} bytes when it is unpacked, which no recording does`
			);
			return null;
		}
		if (unpacked.kind === 'whole') {
			this.unpackedLeft -= unpacked.bytes.length;
			this.check(header, stored, unpacked.bytes);
			return bodyOf(unpacked.bytes);
		}
		this.check(header, stored, null);
		// Some writers announce packing for the whole file and leave single records as they are.
		if (couldBeCollection(stored)) return bodyOf(stored);
		this.remarks.push(
			warning(
				'pqdif-record-damaged',
				`${name}, byte ${header.bodyAt}: the packed record cannot be unpacked (a zlib stream was expected); it was left out.`
			)
		);
		return null;
	}

	/** Says how many checksums were wrong; once, when the file has been read. */
	describeChecksums(): void {
		const { count, firstAt } = this.wrongChecksums;
		if (count === 0) return;
		this.remarks.push(
			warning(
				'pqdif-checksum',
				`${this.file.name}: the checksum of ${counted(count, 'record')} does not fit what the file holds (first at byte ${firstAt}); bytes may have been changed after the recorder wrote them. The records were read all the same.`
			)
		);
	}

	private check(header: RecordHeader, stored: Uint8Array, unpacked: Uint8Array | null): void {
		// Zero means: none was made.
		if (header.checksum === 0) return;
		const fits =
			adler32(stored) === header.checksum ||
			crc32(stored) === header.checksum ||
			(unpacked !== null && adler32(unpacked) === header.checksum);
		if (fits) return;
		if (this.wrongChecksums.count++ === 0) this.wrongChecksums.firstAt = header.at;
	}

	private leaveOut(header: RecordHeader, reason: string): void {
		this.remarks.push(
			warning(
				'pqdif-record-too-large',
				`${this.file.name}, byte ${header.at}: the record ${reason}; it was left out.`
			)
		);
	}
}

function couldBeCollection(bytes: Uint8Array): boolean {
	if (bytes.length < 4) return false;
	const count = new DataView(bytes.buffer, bytes.byteOffset).getInt32(0, true);
	return count > 0 && 4 + count * 28 <= bytes.length;
}
