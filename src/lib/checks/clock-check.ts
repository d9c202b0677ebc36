import { startToUtc_ms, zoneOffset_ms } from '../recording/recording-start';
import type { CaptureCheck } from './capture-check';
import type { CaptureSubject, CheckedPoint } from './capture-subject';

/** Clocks of the world lie up to 26 h apart (UTC−12 to UTC+14): a start that far ahead is no matter of zones. */
export const MOST_ZONE_SPREAD_MS = 26 * 3_600_000;
/** Clocks of a recorder and a server may differ by this much without anybody having to know. */
export const CLOCK_TOLERANCE_MS = 5 * 60_000;
/** Years in which clocks begin that were never set: 1970, 1980 and 2000 (common practice). */
const BEFORE_SET_MS = Date.UTC(2001, 0, 1);
const HOUR_MS = 3_600_000;

const TITLE = 'Time zone and clock';

/** The start of a capture: stated zone against the site's, against the time of the upload, at a change of the clock. */
export function checkClock(subject: CaptureSubject, point: CheckedPoint): CaptureCheck[] {
	const found = [
		inTheFuture(subject),
		neverSet(subject),
		otherZone(subject, point),
		changeOfClock(subject, point),
		...ofTheReader(subject)
	].filter((one) => one !== null);
	const whole = { title: TITLE, channelIndex: null, evidence: clockPicture(subject, point) };
	if (found.length > 0)
		return found.map((one) => ({ ...whole, ...one, sentence: spoken(one.sentence, point.timeZone) }));
	return [
		{
			...whole,
			code: 'clock',
			outcome: 'passes',
			advice: '',
			sentence:
				subject.statedStart === null
					? 'The file tells no start; the one that was entered lies before the upload.'
					: subject.statedStart.utcOffset_min === null
						? `The file tells no zone; its start was read in ${spoken(point.timeZone, point.timeZone)}, where the clock did not change around it.`
						: `The zone that the file states is that of ${spoken(point.timeZone, point.timeZone)} at that date.`
		}
	];
}

/** Names of zones without the low line that stands for a space; elsewhere it sets a subscript. */
function spoken(text: string, timeZone: string): string {
	return text.replaceAll(timeZone, timeZone.replaceAll('_', ' '));
}

type Finding = Pick<CaptureCheck, 'code' | 'outcome' | 'sentence' | 'advice'>;

function inTheFuture({ start_ms, uploaded_ms }: CaptureSubject): Finding | null {
	const ahead_ms = start_ms - uploaded_ms;
	if (ahead_ms <= CLOCK_TOLERANCE_MS) return null;
	return {
		code: 'start-after-upload',
		outcome: ahead_ms > MOST_ZONE_SPREAD_MS ? 'blocks' : 'warns',
		sentence: `The capture starts ${hours(ahead_ms)} after it was uploaded: the recorder’s clock or the zone of its start is wrong.`,
		advice:
			'Compare the recorder’s clock with another one, correct the start above the mapping and analyse again: days and weeks of the verdict follow from it.'
	};
}

function neverSet({ start_ms }: CaptureSubject): Finding | null {
	if (start_ms >= BEFORE_SET_MS) return null;
	return {
		code: 'clock-never-set',
		outcome: 'warns',
		sentence: `The capture starts in ${new Date(start_ms).getUTCFullYear()}: so does a clock that was never set.`,
		advice: 'Enter the true start above the mapping and analyse again.'
	};
}

function otherZone({ statedStart, start_ms }: CaptureSubject, { timeZone }: CheckedPoint): Finding | null {
	const stated_min = statedStart?.utcOffset_min ?? null;
	if (stated_min === null) return null;
	const site_min = Math.round(zoneOffset_ms(timeZone, start_ms) / 60_000);
	if (stated_min === site_min) return null;
	return {
		code: 'zone-differs',
		outcome: stated_min === 0 ? 'notes' : 'warns',
		sentence:
			`The file states its start at ${offsetText(stated_min)}; the clock of ${timeZone} stood at ${offsetText(site_min)} then. ` +
			`The file’s own zone was used${stated_min === 0 ? ', as recorders that keep UTC write it' : ''}.`,
		advice:
			'Check in the recorder’s settings which of the two it ran on; the days of the verdict are those of the site.'
	};
}

function changeOfClock({ statedStart }: CaptureSubject, { timeZone }: CheckedPoint): Finding | null {
	if (statedStart === null || statedStart.utcOffset_min !== null) return null;
	const remark = startToUtc_ms(statedStart, timeZone).remarks[0];
	if (remark === undefined) return null;
	return {
		code: remark.code,
		outcome: 'warns',
		sentence: remark.sentence,
		advice:
			'Look up in the recorder’s notes which of the two hours was meant, and correct the start if needed.'
	};
}

/** What the reader found about the recorder's clock. */
function ofTheReader({ readerRemarks }: CaptureSubject): Finding[] {
	return readerRemarks
		.filter(({ code }) => /clock|leap|time-quality/.test(code))
		.map(({ code, severity, sentence }) => ({
			code,
			outcome: severity === 'warning' ? 'warns' : 'notes',
			sentence,
			advice: severity === 'warning' ? 'Compare the start with another record of the same time.' : ''
		}));
}

function clockPicture(
	{ start_ms, duration_s, uploaded_ms, statedStart }: CaptureSubject,
	{ timeZone }: CheckedPoint
): CaptureCheck['evidence'] {
	const stated_min = statedStart?.utcOffset_min ?? null;
	const span = (from_ms: number) => ({ from_ms, to_ms: from_ms + 1000 * duration_s });
	const asSite =
		statedStart !== null && stated_min !== null
			? startToUtc_ms({ ...statedStart, utcOffset_min: null }, timeZone).utc_ms
			: null;
	return {
		kind: 'spans',
		timeZone,
		spans: [
			{ row: 'as used', ...span(start_ms), label: 'capture', tone: 'plain' },
			...(asSite === null || asSite === start_ms
				? []
				: [
						{
							row: 'if in the site’s zone',
							...span(asSite),
							label: 'capture, read in the site’s zone',
							tone: 'attention' as const
						}
					])
		],
		marks: [{ at_ms: uploaded_ms, label: 'uploaded' }]
	};
}

function offsetText(minutes: number): string {
	const size = Math.abs(minutes);
	const text = `${String(Math.floor(size / 60)).padStart(2, '0')}:${String(size % 60).padStart(2, '0')}`;
	return `UTC${minutes < 0 ? '−' : '+'}${text}`;
}

function hours(ms: number): string {
	if (ms < 2 * HOUR_MS) return `${Math.round(ms / 60_000)} min`;
	return ms < 48 * HOUR_MS ? `${(ms / HOUR_MS).toFixed(1)} h` : `${Math.round(ms / (24 * HOUR_MS))} days`;
}
