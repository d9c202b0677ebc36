import { parseIsoLocal } from '../recording/calendar';
import type { ReadRemark, RecordingStart } from '../recording/recording';
import { startToUtc_ms } from '../recording/recording-start';

/** The instant of the first sample or interval. */
export interface StartInstant {
	/** Milliseconds since 1970-01-01 UTC. */
	start_ms: number;
	/** ISO 8601 in UTC with the digits that the file writes, at least milliseconds. */
	iso: string;
	from: 'file' | 'file-and-time-zone' | 'option';
	remarks: ReadRemark[];
}

/** stated: by the person, who knows better than the file; null for none. */
export function startInstant(
	start: RecordingStart | null,
	stated: RecordingStart | null,
	timeZone: string
): StartInstant | null {
	const used = stated ?? start;
	if (!used) return null;
	const { utc_ms, remarks } = startToUtc_ms(used, timeZone);
	const fraction = (parseIsoLocal(used.local)?.fraction ?? '').replace(/0+$/, '').padEnd(3, '0');
	// Offsets from UTC are whole seconds: the digits behind them stay those of the file.
	const whole = new Date(Math.floor(utc_ms / 1000 + 1e-7) * 1000).toISOString().slice(0, 19);
	const fromFile = used.utcOffset_min === null ? 'file-and-time-zone' : 'file';
	return { start_ms: utc_ms, iso: `${whole}.${fraction}Z`, from: stated ? 'option' : fromFile, remarks };
}
