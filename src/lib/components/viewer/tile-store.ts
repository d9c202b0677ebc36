import type { Tile } from '$lib/recording/pyramid/tile-codec';

export interface TileKey {
	level: number;
	tile: number;
}
export type LoadTile = (key: TileKey, signal: AbortSignal) => Promise<Tile>;

const textOf = ({ level, tile }: TileKey) => `${level}/${tile}`;

function size_bytes(tile: Tile): number {
	return tile.entries * ((tile.starts_s ? 8 : 0) + tile.channels.length * (tile.level === 0 ? 4 : 8));
}

/**
 * Tiles that have been fetched, the least recently used dropped first. Only what the present view wants is on its
 * way; whatever an earlier view wanted and has not come is given up.
 */
export class TileStore {
	private readonly held = new Map<string, Tile>();
	private readonly onTheWay = new Map<string, AbortController>();
	private readonly failedAt = new Map<string, number>();
	private held_bytes = 0;

	constructor(
		private readonly load: LoadTile,
		private readonly capacity_bytes: number,
		private readonly on: { arrived: () => void; failed: (cause: unknown) => void }
	) {}

	get(level: number, tile: number): Tile | null {
		const key = textOf({ level, tile });
		const found = this.held.get(key);
		if (!found) return null;
		this.held.delete(key);
		this.held.set(key, found);
		return found;
	}

	has(key: TileKey): boolean {
		return this.held.has(textOf(key));
	}

	/** needed  what the picture lacks without; ahead  what the next step is likely to need, fetched behind it */
	want(needed: readonly TileKey[], ahead: readonly TileKey[]): void {
		const wanted = new Set([...needed, ...ahead].map(textOf));
		for (const [key, controller] of this.onTheWay)
			if (!wanted.has(key)) {
				controller.abort();
				this.onTheWay.delete(key);
			}
		for (const key of needed) this.fetch(key);
		if (needed.every((key) => this.has(key))) for (const key of ahead) this.fetch(key);
	}

	/** Nothing is fetched any more. */
	close(): void {
		for (const controller of this.onTheWay.values()) controller.abort();
		this.onTheWay.clear();
	}

	private fetch(key: TileKey): void {
		const text = textOf(key);
		if (this.held.has(text) || this.onTheWay.has(text)) return;
		// A tile that could not be had is not asked for at every movement of the mouse.
		if (performance.now() - (this.failedAt.get(text) ?? -Infinity) < RETRY_AFTER_MS) return;
		const controller = new AbortController();
		this.onTheWay.set(text, controller);
		this.load(key, controller.signal).then(
			(tile) => {
				if (this.onTheWay.get(text) !== controller) return;
				this.onTheWay.delete(text);
				this.keep(text, tile);
				this.on.arrived();
			},
			(cause: unknown) => {
				if (this.onTheWay.get(text) !== controller) return;
				this.onTheWay.delete(text);
				this.failedAt.set(text, performance.now());
				this.on.failed(cause);
			}
		);
	}

	private keep(text: string, tile: Tile): void {
		this.held.set(text, tile);
		this.held_bytes += size_bytes(tile);
		for (const [oldest, dropped] of this.held) {
			if (this.held_bytes <= this.capacity_bytes || oldest === text) break;
			this.held.delete(oldest);
			this.held_bytes -= size_bytes(dropped);
		}
	}
}

const RETRY_AFTER_MS = 3000;
