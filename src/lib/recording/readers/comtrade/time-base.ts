import { ok, type Result } from '../../../result';
import type { RateSegment, ReadProblem, ReadRemark, Recording } from '../../recording';
import { note, refuse, warning } from '../read-problem';
import type { ComtradeHeader, ComtradeTiming } from './comtrade-header';
import { stampAt, stampBlocks, STAMPS_AT_ONCE } from './stamp-column';

export type TimeBase = Pick<Recording, 'segments' | 'timeStamps_s'>;

/** Stamps count 32-bit units and start again from 0 after the last one. */
const STAMP_WRAP = 2 ** 32;

/** A stated rate governs; without one the time stamps are all there is. */
export function timeBaseOf(
	dataFile: string,
	header: ComtradeHeader,
	data: ComtradeTiming,
	remarks: ReadRemark[]
): Result<TimeBase, ReadProblem> {
	if (header.rates.length === 0) return timeBaseFromStamps(dataFile, header, data, remarks);
	const segments = segmentsOf(header, data.sampleCount);
	return ok({ segments: splitAtGaps(dataFile, header, data, segments, remarks), timeStamps_s: null });
}

/** The rates of the configuration, cut or stretched to the samples that are there. */
function segmentsOf(header: ComtradeHeader, sampleCount: number): RateSegment[] {
	const segments: RateSegment[] = [];
	let fromSample = 0;
	for (const [index, { samplingRate_Hz, lastSample }] of header.rates.entries()) {
		const isLast = index === header.rates.length - 1;
		const toSample = isLast ? sampleCount : Math.min(lastSample, sampleCount);
		if (toSample > fromSample) segments.push({ samplingRate_Hz, fromSample, toSample });
		fromSample = Math.max(fromSample, toSample);
	}
	return segments;
}

/** Stamps are only believed about gaps where they rise everywhere and agree with the stated rate otherwise. */
function splitAtGaps(
	dataFile: string,
	header: ComtradeHeader,
	data: ComtradeTiming,
	segments: RateSegment[],
	remarks: ReadRemark[]
): RateSegment[] {
	const gaps: { sample: number; gap_s: number }[] = [];
	let elapsedByStamps_s = 0;
	let elapsedByRate_s = 0;
	for (const { samplingRate_Hz, fromSample, toSample } of segments) {
		const step_s = 1 / samplingRate_Hz;
		const tolerance_s = Math.max(0.5 * step_s, 2 * header.stampUnit_s);
		const greatestRise = (step_s + tolerance_s) / header.stampUnit_s;
		for (let from = Math.max(1, fromSample); from < toSample; from += STAMPS_AT_ONCE) {
			const to = Math.min(toSample, from + STAMPS_AT_ONCE);
			const stamps = data.stamps.subarray(from - 1, to);
			let evenCount = 0;
			let evenRise = 0;
			for (let i = 1; i < stamps.length; i++) {
				const rise = stamps[i]! - stamps[i - 1]!;
				if (rise > 0 && rise <= greatestRise) {
					evenCount++;
					evenRise += rise;
					continue;
				}
				const stampStep_s = rise * header.stampUnit_s;
				if (!(stampStep_s > 0)) {
					if (Number.isFinite(rise) && hasStamps(data))
						remarks.push(
							note(
								'stamps-not-rising',
								`${dataFile}: the time stamps do not rise at sample ${from + i}, so they were not used; the sampling rate that ${header.file} states was.`
							)
						);
					return segments;
				}
				gaps.push({ sample: from + i - 1, gap_s: stampStep_s - step_s });
			}
			elapsedByStamps_s += evenRise * header.stampUnit_s;
			elapsedByRate_s += evenCount * step_s;
		}
	}
	const disagreement = elapsedByStamps_s / elapsedByRate_s - 1;
	const manyGaps = gaps.length > Math.max(segments.length, data.sampleCount / 20);
	if (data.sampleCount > 2 && (manyGaps || Math.abs(disagreement) > 0.01)) {
		remarks.push(ratesDisagree(dataFile, header, data));
		return segments;
	}
	if (gaps.length === 0) return segments;
	remarks.push(gapRemark(dataFile, gaps));
	return cutSegments(segments, gaps);
}

/** Whether any stamp is other than zero: recorders that keep no time write nothing but zeros. */
function hasStamps({ stamps }: ComtradeTiming): boolean {
	for (const { values } of stampBlocks(stamps)) if (values.some((stamp) => stamp !== 0)) return true;
	return false;
}

function ratesDisagree(dataFile: string, header: ComtradeHeader, data: ComtradeTiming): ReadRemark {
	const first = stampAt(data.stamps, 0);
	const last = stampAt(data.stamps, data.sampleCount - 1);
	const byStamps_Hz = (data.sampleCount - 1) / ((last - first) * header.stampUnit_s);
	const stated = header.rates[0] as { samplingRate_Hz: number; line: number };
	return warning(
		'rate-and-stamps-disagree',
		`${header.file}, line ${stated.line} states ${stated.samplingRate_Hz} Hz, but the time stamps in ${dataFile} give ${Number(byStamps_Hz.toPrecision(6))} Hz on average; the stated rate was used. Check it against the recorder’s settings.`
	);
}

function gapRemark(dataFile: string, gaps: { sample: number; gap_s: number }[]): ReadRemark {
	const first = gaps[0] as { sample: number; gap_s: number };
	const total_s = gaps.reduce((sum, { gap_s }) => sum + gap_s, 0);
	const places = gaps.length === 1 ? 'one place' : `${gaps.length} places`;
	return warning(
		'time-gap',
		`${dataFile}: by the time stamps no samples were taken in ${places} (first between samples ${first.sample} and ${first.sample + 1}, ${Number(total_s.toPrecision(4))} s in all); the stretches are kept apart.`
	);
}

function cutSegments(segments: RateSegment[], gaps: { sample: number; gap_s: number }[]): RateSegment[] {
	const cut: RateSegment[] = [];
	for (const segment of segments) {
		let current: RateSegment = { ...segment };
		for (const { sample, gap_s } of gaps) {
			if (sample < segment.fromSample || sample >= segment.toSample) continue;
			if (sample > current.fromSample) cut.push({ ...current, toSample: sample });
			current = { ...segment, fromSample: sample, gapBefore_s: gap_s };
		}
		cut.push(current);
	}
	return cut;
}

/** No rate: stamps are critical. Evenly spaced ones give a rate; any others are handed on as they are. */
function timeBaseFromStamps(
	dataFile: string,
	header: ComtradeHeader,
	data: ComtradeTiming,
	remarks: ReadRemark[]
): Result<TimeBase, ReadProblem> {
	let last_s = -Infinity;
	for (const { from, times_s } of stampTimes(header, data)) {
		for (let i = 0; i < times_s.length; i++) {
			const time_s = times_s[i] as number;
			if (!(time_s > last_s)) return noTime(dataFile, header, from + i + 1, Number.isNaN(time_s));
			last_s = time_s;
		}
	}
	if (data.sampleCount < 2) return noTime(dataFile, header, 1, true);
	const step_s = last_s / (data.sampleCount - 1);
	if (!isEven(header, data, step_s)) {
		remarks.push(
			warning(
				'uneven-time-stamps',
				`${header.file}, line ${header.rateCountLine} states no sampling rate, and the time stamps in ${dataFile} are not evenly spaced; the samples were kept with their own times.`
			)
		);
		const timeStamps_s = new Float64Array(data.sampleCount);
		for (const { from, times_s } of stampTimes(header, data)) timeStamps_s.set(times_s, from);
		return ok({ segments: [], timeStamps_s });
	}
	const samplingRate_Hz = 1 / step_s;
	remarks.push(
		note(
			'rate-from-stamps',
			`${header.file}, line ${header.rateCountLine} states no sampling rate; the time stamps in ${dataFile} are evenly spaced at ${Number(samplingRate_Hz.toPrecision(9))} Hz.`
		)
	);
	const toSample = data.sampleCount;
	return ok({ segments: [{ samplingRate_Hz, fromSample: 0, toSample }], timeStamps_s: null });
}

/** Seconds of the samples after sample 0, some at a time; NaN where a sample has no stamp. */
function* stampTimes(
	{ stampUnit_s }: ComtradeHeader,
	{ stamps }: ComtradeTiming
): Generator<{ from: number; times_s: Float64Array }> {
	let first = NaN;
	let before = NaN;
	let wrapped = 0;
	for (const { from, values } of stampBlocks(stamps)) {
		if (from === 0) first = values[0] as number;
		const times_s = new Float64Array(values.length);
		for (let i = 0; i < values.length; i++) {
			const stamp = values[i] as number;
			if (before - stamp > STAMP_WRAP / 2) wrapped += STAMP_WRAP;
			times_s[i] = (stamp + wrapped - first) * stampUnit_s;
			before = stamp;
		}
		yield { from, times_s };
	}
}

function noTime(dataFile: string, header: ComtradeHeader, sample: number, isMissing: boolean) {
	const found = isMissing ? 'has no time stamp' : 'is not later than the one before it';
	return refuse(
		'no-rate-and-no-stamps',
		header.file,
		`line ${header.rateCountLine}`,
		`${header.file}, line ${header.rateCountLine} states no sampling rate, so every sample needs a rising time stamp, but sample ${sample} of ${dataFile} ${found}. Enter the recorder’s sampling rate in the configuration; none is ever assumed.`
	);
}

/** Whether the stamps lie on a straight line within one unit of their resolution. */
function isEven(header: ComtradeHeader, data: ComtradeTiming, step_s: number): boolean {
	const tolerance_s = Math.min(1.01 * header.stampUnit_s, 0.1 * step_s);
	for (const { from, times_s } of stampTimes(header, data))
		for (let i = 0; i < times_s.length; i++)
			if (Math.abs((times_s[i] as number) - (from + i) * step_s) > tolerance_s) return false;
	return true;
}
