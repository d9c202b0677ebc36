const DAY_MS = 86_400_000;

/** The demo's own time: it tells a story that ends today, and every deed in it has its moment. */
export function storyClock(today: Date) {
	let now = today;
	return {
		clock: () => now,
		/** Moves to `days` before today, at the hour (UTC) of that day. */
		at(days: number, hour: number): Date {
			const day = new Date(today.getTime() - days * DAY_MS);
			now = new Date(
				Date.UTC(
					day.getUTCFullYear(),
					day.getUTCMonth(),
					day.getUTCDate(),
					Math.floor(hour),
					Math.round((hour % 1) * 60)
				)
			);
			return now;
		}
	};
}

export type StoryClock = ReturnType<typeof storyClock>;

/** Local ISO start of a recording, `days` before the story's today, in a zone with the given offset. */
export function localStart(today: Date, days: number, time: string, utcOffset_min: number) {
	const day = new Date(today.getTime() - days * DAY_MS + utcOffset_min * 60_000);
	return { local: `${day.toISOString().slice(0, 10)}T${time}`, utcOffset_min };
}
