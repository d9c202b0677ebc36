import type { ComtradeData, ComtradeHeader, StampColumn } from './comtrade-header';
import type { DataPart } from './data-part';
import type { BinaryFormat } from './dat-binary';
import { StatusWatch } from './status-watch';

const STAMP_MISSING = 0xffff_ffff;

/** Rows read at a time, bytes. */
const BLOCK_BYTES = 1 << 17;

/** Mark of a missing value; words are 16 bits, the low one first. */
const INT16_MISSING = -0x8000;
/** Exponent of a float that is infinite or no number, in its upper word. */
const NOT_FINITE = 0x7f80;

/**
 * Rows of binary data that stay in their file. Their time stamps are read as they are asked for; what is missing and how the
 * status channels change is counted as the rows come by for the first time, so that the file is read through only once.
 */
export class BinaryRows implements StampColumn {
	readonly length: number;
	private readonly block: Uint8Array;
	private readonly words: Int16Array;
	private readonly view: DataView;
	private readonly rowsAtOnce: number;
	private readonly missingCounts: number[];
	private readonly status: StatusWatch;
	private readonly statusCount: number;
	private readonly wordsBefore: Int16Array;
	private surveyed = 0;

	constructor(
		private readonly part: DataPart,
		private readonly format: BinaryFormat,
		header: ComtradeHeader,
		private readonly rowBytes: number,
		sampleCount: number
	) {
		this.length = sampleCount;
		this.rowsAtOnce = Math.max(1, Math.floor(BLOCK_BYTES / rowBytes));
		this.block = new Uint8Array(this.rowsAtOnce * rowBytes);
		this.words = new Int16Array(this.block.buffer);
		this.view = new DataView(this.block.buffer);
		this.missingCounts = header.analogues.map(() => 0);
		this.statusCount = header.statuses.length;
		this.status = new StatusWatch(header.statuses);
		this.wordsBefore = new Int16Array(Math.ceil(this.statusCount / 16));
	}

	subarray(from: number, to: number): Float64Array {
		const stamps = new Float64Array(to - from);
		for (let row = from; row < to; row += this.rowsAtOnce) {
			const count = Math.min(this.rowsAtOnce, to - row);
			this.load(row, count);
			for (let i = 0; i < count; i++) {
				const stamp = this.view.getUint32(i * this.rowBytes + 4, true);
				stamps[row - from + i] = stamp === STAMP_MISSING ? NaN : stamp;
			}
		}
		return stamps;
	}

	survey(): ReturnType<ComtradeData['survey']> {
		while (this.surveyed < this.length)
			this.load(this.surveyed, Math.min(this.rowsAtOnce, this.length - this.surveyed));
		return { missingCounts: this.missingCounts, statusActivity: this.status.activity() };
	}

	private load(row: number, count: number): void {
		const { part, rowBytes } = this;
		part.file.read(part.start + row * rowBytes, this.block.subarray(0, count * rowBytes));
		if (row > this.surveyed || row + count <= this.surveyed) return;
		for (let i = this.surveyed - row; i < count; i++) {
			const at = (i * rowBytes) >> 1;
			this.countMissing(at + 4);
			if (this.statusCount > 0) this.watchStatus(at, row + i);
		}
		this.surveyed = row + count;
	}

	private countMissing(at: number): void {
		const { words, missingCounts } = this;
		const count = missingCounts.length;
		switch (this.format) {
			case 'BINARY':
				for (let c = 0; c < count; c++) if (words[at + c] === INT16_MISSING) missingCounts[c]!++;
				return;
			case 'BINARY32':
				for (let c = 0; c < count; c++)
					if (words[at + 2 * c + 1] === INT16_MISSING && words[at + 2 * c] === 0) missingCounts[c]!++;
				return;
			case 'FLOAT32':
				for (let c = 0; c < count; c++)
					if ((words[at + 2 * c + 1]! & NOT_FINITE) === NOT_FINITE) missingCounts[c]!++;
		}
	}

	private watchStatus(row: number, sample: number): void {
		const first = row + 4 + (this.format === 'BINARY' ? 1 : 2) * this.missingCounts.length;
		for (let w = 0; w < this.wordsBefore.length; w++) {
			const word = this.words[first + w]!;
			if (word === this.wordsBefore[w] && sample > 0) continue;
			this.wordsBefore[w] = word;
			const to = Math.min(this.statusCount, 16 * (w + 1));
			for (let channel = 16 * w; channel < to; channel++)
				this.status.see(channel, (word >> (channel & 15)) & 1, sample);
		}
	}
}
