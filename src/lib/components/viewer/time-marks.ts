const STEPS_S = [
	1, 2, 5, 10, 15, 30, 60, 120, 300, 600, 900, 1800, 3600, 7200, 10_800, 21_600, 43_200, 86_400
];

/** A round step of time so that no more than `most` marks fall into the range. */
export function timeStep_s(length_s: number, most: number): number {
	const least = length_s / Math.max(1, most);
	if (least >= 1) {
		const step = STEPS_S.find((candidate) => candidate >= least);
		return step ?? 86_400 * Math.ceil(least / 86_400);
	}
	const power = 10 ** Math.floor(Math.log10(least));
	return [1, 2, 5, 10].map((m) => m * power).find((candidate) => candidate >= least * (1 - 1e-9))!;
}

export function timeMarks(from_s: number, to_s: number, step_s: number): number[] {
	const marks: number[] = [];
	for (let k = Math.ceil(from_s / step_s - 1e-9); k * step_s <= to_s + 1e-9 * step_s; k++)
		marks.push(k * step_s);
	return marks;
}

/** Digits after the decimal sign that tell two such steps apart. */
export function secondDigits(step_s: number): number {
	return step_s >= 1 ? 0 : Math.min(9, Math.ceil(-Math.log10(step_s) - 1e-9));
}

/** Seconds from the start as text, e.g. "12.340 s"; hours and minutes where they are many. */
export function secondsText(time_s: number, step_s: number): string {
	const digits = secondDigits(step_s);
	if (time_s < 600 || digits > 0) return `${time_s.toFixed(digits)} s`;
	const whole = Math.round(time_s);
	const two = (value: number) => String(value).padStart(2, '0');
	const days = Math.floor(whole / 86_400);
	const clock = `${two(Math.floor((whole % 86_400) / 3600))}:${two(Math.floor((whole % 3600) / 60))}:${two(whole % 60)}`;
	return days > 0 ? `${days} d ${clock}` : clock;
}

/** The site's clock at a moment, as fine as the step needs. */
export function clockText(instant_ms: number, zone: string, step_s: number, withDay: boolean): string {
	const clock = new Intl.DateTimeFormat('en-GB', {
		timeZone: zone,
		hourCycle: 'h23',
		hour: '2-digit',
		minute: '2-digit',
		...(step_s < 60 ? { second: '2-digit' as const } : {})
	}).format(instant_ms);
	const digits = Math.min(6, secondDigits(step_s));
	const fraction = (((instant_ms / 1000) % 1) + 1) % 1;
	const fine = digits > 0 ? `${clock}${fraction.toFixed(6).slice(1, 2 + digits)}` : clock;
	if (!withDay) return fine;
	const day = new Intl.DateTimeFormat('en-GB', { timeZone: zone, day: 'numeric', month: 'short' }).format(
		instant_ms
	);
	return `${day} ${fine}`;
}

/** A length of time with a fitting unit: "16.67 ms", "2.4 s". */
export function lengthText(length_s: number): string {
	const magnitude = Math.abs(length_s);
	if (magnitude === 0) return '0 s';
	if (magnitude < 1e-3) return `${(1e6 * length_s).toPrecision(4)} µs`;
	if (magnitude < 1) return `${(1e3 * length_s).toPrecision(4)} ms`;
	if (magnitude < 600) return `${length_s.toPrecision(5)} s`;
	return secondsText(length_s, 1);
}

/** A value to so many significant digits, without a power of ten. */
export function significant(value: number, digits: number): string {
	if (!Number.isFinite(value)) return 'no data';
	if (value === 0) return '0';
	const decimals = Math.max(0, Math.min(12, digits - 1 - Math.floor(Math.log10(Math.abs(value)))));
	return value.toFixed(decimals).replace('-', '−');
}
