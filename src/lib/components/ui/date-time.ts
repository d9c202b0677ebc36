/** Moments as text: "19 March 2026", "19 Mar 2026, 14:05 GMT". One wording everywhere, whatever the machine's locale. */
export function formatInstant(
	instant: Date,
	zone: string,
	show: 'date' | 'datetime',
	nameZone = false
): string {
	if (show === 'date') {
		return new Intl.DateTimeFormat('en-GB', {
			timeZone: zone,
			day: 'numeric',
			month: 'long',
			year: 'numeric'
		}).format(instant);
	}
	return new Intl.DateTimeFormat('en-GB', {
		timeZone: zone,
		day: 'numeric',
		month: 'short',
		year: 'numeric',
		hour: '2-digit',
		minute: '2-digit',
		hourCycle: 'h23',
		...(nameZone ? { timeZoneName: 'short' as const } : {})
	}).format(instant);
}

/** Whether clocks in both zones show the same at that moment. */
export function sameWallClock(instant: Date, zoneA: string, zoneB: string): boolean {
	return formatInstant(instant, zoneA, 'datetime') === formatInstant(instant, zoneB, 'datetime');
}
