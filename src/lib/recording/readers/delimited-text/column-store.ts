import type { CaptureHandle } from '../../capture-handle';
import type { SampleScratch, ScratchFile } from '../../sample-scratch';

/** Room of one chunk of rows on its way to scratch. */
const CHUNK_BYTES = 4 << 20;
const FEWEST_ROWS = 256;

/** Columns of numbers that grow row by row, in memory or, for tables of any length, on scratch. */
export interface ColumnStore {
	readonly rowCount: number;
	/** Appends [columns] values. */
	push(row: ArrayLike<number>): void;
	/** Ends the writing; columns can be had from now on. */
	seal(): void;
	/** [rowCount] values of one column, fetched anew at each call where they lie on scratch. */
	column(index: number): Float64Array;
	/** The same in pieces, in order, so that a long column need not be in memory. */
	pieces(index: number): Iterable<Float64Array>;
}

/** scratch  where the numbers go; null keeps them in memory */
export function createColumnStore(columnCount: number, scratch: SampleScratch | null): ColumnStore {
	return scratch === null
		? new MemoryColumns(columnCount)
		: new ScratchColumns(columnCount, scratch.create());
}

class MemoryColumns implements ColumnStore {
	rowCount = 0;
	private rooms: Float64Array[];

	constructor(columnCount: number) {
		this.rooms = Array.from({ length: columnCount }, () => new Float64Array(64));
	}

	push(row: ArrayLike<number>): void {
		if (this.rooms.length > 0 && this.rowCount === this.rooms[0]!.length)
			this.rooms = this.rooms.map((room) => {
				const wider = new Float64Array(room.length * 2);
				wider.set(room);
				return wider;
			});
		for (let column = 0; column < this.rooms.length; column++)
			this.rooms[column]![this.rowCount] = row[column] as number;
		this.rowCount++;
	}

	seal(): void {
		this.rooms = this.rooms.map((room) => room.slice(0, this.rowCount));
	}

	column(index: number): Float64Array {
		return this.rooms[index] as Float64Array;
	}

	pieces(index: number): Iterable<Float64Array> {
		return [this.column(index)];
	}
}

/** Chunks of rows, turned so that each column of a chunk lies in one piece. */
class ScratchColumns implements ColumnStore {
	rowCount = 0;
	private readonly chunkRows: number;
	private readonly chunk: Float64Array;
	private filled = 0;
	private sealed: CaptureHandle | null = null;

	constructor(
		private readonly columnCount: number,
		private readonly file: ScratchFile
	) {
		this.chunkRows = Math.max(FEWEST_ROWS, Math.floor(CHUNK_BYTES / 8 / Math.max(1, columnCount)));
		this.chunk = new Float64Array(this.chunkRows * columnCount);
	}

	push(row: ArrayLike<number>): void {
		for (let column = 0; column < this.columnCount; column++)
			this.chunk[column * this.chunkRows + this.filled] = row[column] as number;
		this.rowCount++;
		if (++this.filled === this.chunkRows) this.flush();
	}

	/** A chunk is always written whole, so that the place of every piece follows from its number. */
	private flush(): void {
		this.file.append(new Uint8Array(this.chunk.buffer));
		this.filled = 0;
	}

	seal(): void {
		if (this.filled > 0) this.flush();
		this.sealed = this.file.seal();
	}

	*pieces(index: number): Iterable<Float64Array> {
		for (let from = 0; from < this.rowCount; from += this.chunkRows) {
			const piece = new Float64Array(Math.min(this.chunkRows, this.rowCount - from));
			const chunk_bytes = this.chunk.byteLength;
			const at_bytes = (from / this.chunkRows) * chunk_bytes + index * this.chunkRows * 8;
			this.sealed!.read(at_bytes, new Uint8Array(piece.buffer));
			yield piece;
		}
	}

	column(index: number): Float64Array {
		const values = new Float64Array(this.rowCount);
		let at = 0;
		for (const piece of this.pieces(index)) {
			values.set(piece, at);
			at += piece.length;
		}
		return values;
	}
}
