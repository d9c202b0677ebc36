import { parseIsoLocal } from '$lib/recording/calendar';
import type { RecordingStart } from '$lib/recording/recording';
import { startToUtc_ms, zoneOffset_ms } from '$lib/recording/recording-start';
import { err, ok, type Result } from '$lib/result';

export interface StartField {
	/** The file tells the instant, zone included: nothing to decide. */
	told: boolean;
	/** The file tells a date and time, with or without a zone. */
	written: boolean;
	/** Local time at the site, for the field; empty when nobody has told it yet. */
	local: string;
}

/** "2026-03-02T10:00:00.125" on the clock of `zone`. */
function localIso(instant_ms: number, zone: string): string {
	return new Date(instant_ms + zoneOffset_ms(zone, instant_ms)).toISOString().slice(0, 23);
}

/** What the start field shows: the confirmed start before the file's own. */
export function startText(
	start: RecordingStart | null,
	confirmedAt: string | null,
	zone: string
): StartField {
	const told = start !== null && start.utcOffset_min !== null;
	const written = start !== null;
	if (confirmedAt !== null) return { told, written, local: localIso(Date.parse(confirmedAt), zone) };
	return { told, written, local: '' };
}

/** The confirmed start; the field counts only where the file leaves it open. */
export function readStart(
	field: FormDataEntryValue | null,
	start: RecordingStart | null,
	zone: string
): Result<Date, string> {
	if (start !== null && start.utcOffset_min !== null) return ok(new Date(startToUtc_ms(start, zone).utc_ms));
	const typed = String(field ?? '').trim();
	const whole = /T\d{2}:\d{2}$/.test(typed) ? `${typed}:00` : typed;
	if (parseIsoLocal(whole) === null)
		return err('Enter the date and time of the first sample, by the clock at the site.');
	return ok(new Date(startToUtc_ms({ local: whole, utcOffset_min: null }, zone).utc_ms));
}
