/** First byte that is handed out: the module itself keeps nothing, but address 0 looks like a mistake. */
const FIRST = 64;
const CACHE_LINE = 64;
/** Neighbouring channels lie this far apart modulo a memory page, so that they do not compete for the same cache sets. */
const STAGGER = 9 * CACHE_LINE;
const CACHE_WAY = 4096;
const PAGE_BYTES = 65536;

/** A region of equally long buffers, one per channel. */
export interface ChannelRegion {
	/** Address of the first channel's buffer, bytes. */
	at: number;
	/** Distance from one channel's buffer to the next, bytes. */
	stride: number;
}

/** Hands out addresses in the kernels' memory, one after the other, each on a cache line of its own. */
export class MemoryLayout {
	#next = FIRST;

	/** Pages of 64 KiB that hold everything handed out so far. */
	get pages(): number {
		return Math.ceil(this.#next / PAGE_BYTES);
	}

	/** Address of a region of `bytes` bytes. */
	reserve(bytes: number): number {
		const at = this.#next;
		this.#next = Math.ceil((at + bytes) / CACHE_LINE) * CACHE_LINE;
		return at;
	}

	/** One buffer of `length` f64 for each channel. */
	reserveChannels(channelCount: number, length: number): ChannelRegion {
		const least = 8 * length;
		const stride = Math.ceil((least - STAGGER) / CACHE_WAY) * CACHE_WAY + STAGGER;
		return { at: this.reserve(channelCount * stride), stride };
	}
}
