/** Locale and digits for print. Values stay unrounded everywhere else; this is the one place that rounds. */
export interface FormatOptions {
	/** BCP 47 tag; decides decimal comma or point and the grouping of digits. */
	locale?: string;
	/** Digits after the decimal sign. */
	decimals?: number;
}

/** What stands where a measurement is missing. Zero is not "no data". */
export const NO_DATA = '–';

const DEFAULT_LOCALE = 'en';

const formatters = new Map<string, Intl.NumberFormat>();

function formatter(locale: string, decimals: number): Intl.NumberFormat {
	const key = `${locale}/${decimals}`;
	const known = formatters.get(key);
	if (known !== undefined) return known;
	const made = new Intl.NumberFormat(locale, {
		minimumFractionDigits: decimals,
		maximumFractionDigits: decimals,
		// A figure that rounds to nothing has no sign.
		signDisplay: 'negative'
	});
	formatters.set(key, made);
	return made;
}

function isMissing(value: number | null | undefined): value is null | undefined {
	return value === null || value === undefined || !Number.isFinite(value);
}

/** A bare number with a fixed count of decimals (default 2). null, NaN and infinities read as "no data". */
export function formatNumber(value: number | null | undefined, options: FormatOptions = {}): string {
	if (isMissing(value)) return NO_DATA;
	return formatter(options.locale ?? DEFAULT_LOCALE, options.decimals ?? 2).format(value);
}

/** "9.63 %" (default 2 decimals). */
export function formatPct(value: number | null | undefined, options: FormatOptions = {}): string {
	return isMissing(value) ? NO_DATA : `${formatNumber(value, options)}\u00a0%`;
}

/** Digits after the decimal sign that give three significant figures, as trade practice prints levels. */
function decimalsForThreeFigures(value: number): number {
	const magnitude = Math.abs(value);
	if (magnitude >= 100 || magnitude === 0) return 0;
	return magnitude >= 10 ? 1 : 2;
}

function withPrefix(value: number | null | undefined, unit: string, options: FormatOptions): string {
	if (isMissing(value)) return NO_DATA;
	const magnitude = Math.abs(value);
	const [scale, prefix] = magnitude >= 1e6 ? [1e6, 'M'] : magnitude >= 1e3 ? [1e3, 'k'] : [1, ''];
	const scaled = value / scale;
	const decimals = options.decimals ?? decimalsForThreeFigures(scaled);
	return `${formatNumber(scaled, { ...options, decimals })}\u00a0${prefix}${unit}`;
}

/** 480 → "480 V", 13800 → "13.8 kV". Input in volts. */
export function formatVoltage(value_V: number | null | undefined, options: FormatOptions = {}): string {
	return withPrefix(value_V, 'V', options);
}

/** 9.63 → "9.63 A", 31378 → "31.4 kA". Input in amperes; below 10 kA the trade prints amperes. */
export function formatCurrent(value_A: number | null | undefined, options: FormatOptions = {}): string {
	if (isMissing(value_A)) return NO_DATA;
	if (Math.abs(value_A) >= 1e4) return withPrefix(value_A, 'A', options);
	const decimals = options.decimals ?? decimalsForThreeFigures(value_A);
	return `${formatNumber(value_A, { ...options, decimals })}\u00a0A`;
}

/** 1.5e6 → "1.50 MVA". Input in volt-amperes. */
export function formatApparentPower(
	value_VA: number | null | undefined,
	options: FormatOptions = {}
): string {
	return withPrefix(value_VA, 'VA', options);
}

/** 60 → "60.00 Hz" (two decimals unless told otherwise). */
export function formatFrequency(value_Hz: number | null | undefined, options: FormatOptions = {}): string {
	return isMissing(value_Hz) ? NO_DATA : `${formatNumber(value_Hz, options)}\u00a0Hz`;
}

/** 9.6 → "9.6 s", 90 → "1 min 30 s", 604800 → "7 d". The two largest parts are printed. */
export function formatDuration(value_s: number | null | undefined, options: FormatOptions = {}): string {
	if (isMissing(value_s)) return NO_DATA;
	if (value_s < 60) {
		const decimals = options.decimals ?? (Number.isInteger(value_s) ? 0 : value_s < 10 ? 2 : 1);
		return `${formatNumber(value_s, { ...options, decimals })}\u00a0s`;
	}
	const total = Math.round(value_s);
	const parts: [number, string][] = [
		[Math.floor(total / 86_400), 'd'],
		[Math.floor((total % 86_400) / 3_600), 'h'],
		[Math.floor((total % 3_600) / 60), 'min'],
		[total % 60, 's']
	];
	const first = parts.findIndex(([count]) => count > 0);
	return parts
		.slice(first, first + 2)
		.filter(([count]) => count > 0)
		.map(([count, unit]) => `${formatNumber(count, { ...options, decimals: 0 })}\u00a0${unit}`)
		.join(' ');
}

/** A share 0…1 as whole percent, never rounded up to 100 % nor down to 0 % when it is not that. */
export function formatShare(share: number | null | undefined, options: FormatOptions = {}): string {
	if (isMissing(share)) return NO_DATA;
	const percent = share * 100;
	if (share < 1 && Math.round(percent) === 100) return `>\u00a0${formatPct(99, { ...options, decimals: 0 })}`;
	if (share > 0 && Math.round(percent) === 0) return `<\u00a0${formatPct(1, { ...options, decimals: 0 })}`;
	return formatPct(percent, { decimals: 0, ...options });
}

/** 1 → "1st", 2 → "2nd", 11 → "11th": a harmonic order in an English sentence. */
export function formatOrdinal(order: number): string {
	const lastTwo = order % 100;
	if (lastTwo >= 11 && lastTwo <= 13) return `${order}th`;
	return `${order}${['th', 'st', 'nd', 'rd'][order % 10] ?? 'th'}`;
}
