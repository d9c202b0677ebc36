import type { StatusActivity } from '../../recording';
import type { StatusLine } from './comtrade-header';

const UNKNOWN = -1;

/** Follows the status channels from sample to sample; only changes cost more than a comparison. */
export class StatusWatch {
	private readonly states: Int8Array;
	private readonly firstStates: Int8Array;
	private readonly changeCounts: Uint32Array;
	private readonly firstChanges: Float64Array;

	constructor(private readonly lines: readonly StatusLine[]) {
		this.states = new Int8Array(lines.length).fill(UNKNOWN);
		this.firstStates = new Int8Array(lines.length).fill(UNKNOWN);
		this.changeCounts = new Uint32Array(lines.length);
		this.firstChanges = new Float64Array(lines.length);
	}

	/** The state (0 or 1) of one status channel at a sample. */
	see(channel: number, state: number, sample: number): void {
		if (this.states[channel] === state) return;
		if (this.states[channel] === UNKNOWN) this.firstStates[channel] = state;
		else if (this.changeCounts[channel]!++ === 0) this.firstChanges[channel] = sample;
		this.states[channel] = state;
	}

	/** What became of each channel, in the order of the configuration. */
	activity(): StatusActivity[] {
		return this.lines.map(({ name, normalState }, channel) => ({
			name,
			normalState,
			startsAs: this.firstStates[channel] === UNKNOWN ? null : (this.firstStates[channel] as 0 | 1),
			changeCount: this.changeCounts[channel]!,
			firstChangeAtSample: this.changeCounts[channel] === 0 ? null : this.firstChanges[channel]!
		}));
	}
}
