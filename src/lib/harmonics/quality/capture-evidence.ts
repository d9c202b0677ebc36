import type { CaptureSource } from '../../recording/sample-source';
import { readStretch } from '../engine/read-stretch';
import { stretchesOf, stretchDuration_s, type Stretch } from '../engine/stretches';
import { ORDER_STRIDE } from '../intervals';
import type { CaptureFindings, ChannelAnalysis } from '../waveform-analysis';
import { meanFundamental } from './fundamental-phasors';

/** Points of one excerpt at most: two cycles at 256 samples a cycle. */
const EXCERPT_POINTS = 512;
const EXCERPT_CYCLES = 2;
/** Samples that are looked through at once for a cut crest. */
const SEARCH_BLOCK = 65_536;
/** Stretches that are kept; a capture broken oftener is told by its count. */
const MOST_STRETCHES = 100;

/** A few cycles of one channel, primary V or A; null where a sample is missing. */
export interface Excerpt {
	from_s: number;
	step_s: number;
	values: (number | null)[];
}

/** What the checks of one channel rest on; null is "not known". */
export interface ChannelEvidence {
	/** Index into Recording.channels, or of the first column of a trend that belongs to this conductor. */
	channelIndex: number;
	name: string;
	quantity: ChannelAnalysis['mapping']['quantity'];
	phase: ChannelAnalysis['mapping']['phase'];
	rms: number | null;
	dc: number | null;
	fundamental: { rms: number; phase_deg: number | null } | null;
	/** Index = order: rms of what lies between the harmonics beside it, as much as a subgroup would hold; empty for trends. */
	floor: (number | null)[];
	excerpt: Excerpt | null;
	/** Orders from 2 without a single value although a higher one has values; empty for waveforms. */
	missingOrders: number[];
	highestOrder: number;
	/** What no supply or load can have done, each a sentence; empty for waveforms. */
	implausible: string[];
}

/** Bounded facts about a capture that its checks rest on, kept with the analysis. */
export interface CaptureEvidence {
	samplingRate_Hz: number | null;
	frequency_Hz: number | null;
	statedFrequency_Hz: number | null;
	/** Recorded stretches without a gap, seconds from the first sample; in order of time, the first hundred. */
	stretches: { from_s: number; to_s: number }[];
	stretchCount: number;
	channels: ChannelEvidence[];
}

/**
 * What the checks' pictures are drawn from.
 * returns  about 10 kB a channel at most, however long the capture
 */
export function captureEvidence(source: CaptureSource, findings: CaptureFindings): CaptureEvidence {
	const stretches = stretchesOf(source);
	const list = stretches.ok ? stretches.value.list : [];
	const longest = list.reduce<Stretch | null>(
		(best, one) => (best === null || stretchDuration_s(one) > stretchDuration_s(best) ? one : best),
		null
	);
	const clipped = new Set(
		findings.quality.flatMap(({ code, channelIndex }) => (code === 'clipped' ? [channelIndex] : []))
	);
	return {
		samplingRate_Hz: longest?.samplingRate_Hz ?? null,
		frequency_Hz: known(findings.meanFrequency_Hz),
		statedFrequency_Hz: source.nominalFrequency_Hz,
		stretches: list
			.slice(0, MOST_STRETCHES)
			.map((one) => ({ from_s: one.offset_s, to_s: one.offset_s + stretchDuration_s(one) })),
		stretchCount: list.length,
		channels: findings.whole.map((channel) => {
			const { channelIndex, quantity, phase } = channel.mapping;
			const fundamental = meanFundamental(channel);
			return {
				channelIndex,
				name: channel.name,
				quantity,
				phase,
				rms: known(channel.rms[0]!),
				dc: known(channel.dc[0]!),
				fundamental: fundamental && { rms: fundamental.rms, phase_deg: known(fundamental.phase_deg) },
				floor: floorOf(channel, findings.cyclesPerWindow),
				excerpt:
					longest &&
					excerptOf(source, channel, longest, findings.meanFrequency_Hz, clipped.has(channelIndex)),
				missingOrders: [],
				highestOrder: findings.highestOrder,
				implausible: []
			};
		})
	};
}

function known(value: number): number | null {
	return Number.isFinite(value) ? value : null;
}

/**
 * Floor under each order: of the two interharmonic centred subgroups beside it the lesser one, because a real
 * interharmonic lies on one side only, scaled from its N − 3 lines to the three lines of a harmonic subgroup.
 * Source of the line counts: IEC 61000-4-7:2002+A1:2008, 5.6 and 5.8 (clauses from memory)
 */
function floorOf(channel: ChannelAnalysis, cyclesPerWindow: 10 | 12): (number | null)[] {
	const share = Math.sqrt(3 / (cyclesPerWindow - 3));
	const beside = channel.interharmonicSubgroups;
	return Array.from({ length: ORDER_STRIDE }, (_, order) => {
		if (order < 2) return null;
		const sides = [beside[order - 1]!, beside[order]!].filter((value) => !Number.isNaN(value));
		return sides.length === 0 ? null : known(share * Math.min(...sides));
	});
}

function excerptOf(
	source: CaptureSource,
	{ mapping }: ChannelAnalysis,
	stretch: Stretch,
	frequency_Hz: number,
	atExtreme: boolean
): Excerpt {
	const { samplingRate_Hz, fromSample, toSample, offset_s } = stretch;
	const length = Math.min(
		toSample - fromSample,
		Math.max(2, Math.round((EXCERPT_CYCLES * samplingRate_Hz) / frequency_Hz))
	);
	const centre = atExtreme ? extremeAt(source, mapping.channelIndex, stretch) : fromSample;
	const from = Math.max(fromSample, Math.min(toSample - length, centre - Math.floor(length / 2)));
	const every = Math.ceil(length / EXCERPT_POINTS);
	const [samples] = readStretch(source, [mapping.channelIndex], from, from + length);
	const values: (number | null)[] = [];
	for (let at = 0; at < length; at += every) values.push(known(samples![at]! * mapping.toPrimary));
	return {
		from_s: offset_s + (from - fromSample) / samplingRate_Hz,
		step_s: every / samplingRate_Hz,
		values
	};
}

/** Sample with the greatest size; of equal ones the first, which is where a cut crest begins. */
function extremeAt(source: CaptureSource, channelIndex: number, stretch: Stretch): number {
	let at = stretch.fromSample;
	let greatest = -1;
	for (let from = stretch.fromSample; from < stretch.toSample; from += SEARCH_BLOCK) {
		const to = Math.min(stretch.toSample, from + SEARCH_BLOCK);
		const [samples] = readStretch(source, [channelIndex], from, to);
		for (let i = 0; i < to - from; i++) {
			const size = Math.abs(samples![i]!);
			if (!(size > greatest)) continue;
			greatest = size;
			at = from + i;
		}
	}
	return at;
}
