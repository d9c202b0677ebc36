/** Zones the runtime knows, UTC first: the list a site's zone is chosen from. */
export function timeZoneNames(): string[] {
	return ['UTC', ...Intl.supportedValuesOf('timeZone').filter((zone) => zone !== 'UTC')];
}

/** Also true for zones kept under an older name ("Asia/Calcutta"). */
export function isTimeZone(name: string): boolean {
	if (name.trim() === '') return false;
	try {
		new Intl.DateTimeFormat('en', { timeZone: name });
		return true;
	} catch {
		return false;
	}
}

const A = 'A'.charCodeAt(0);
const LETTERS = Array.from({ length: 26 }, (_, i) => String.fromCharCode(A + i));
let countries: Map<string, string> | null = null;

/** The runtime's own zone tables, read once: zone → ISO 3166-1 country. Empty where the runtime keeps none. */
function countryTable(): Map<string, string> {
	const table = new Map<string, string>();
	for (const first of LETTERS) {
		for (const second of LETTERS) {
			// The region of the locale is today's code even where the letters are a withdrawn one (DD → DE).
			const locale = new Intl.Locale(`und-${first}${second}`);
			for (const zone of zonesOf(locale))
				if (!table.has(zone)) table.set(zone, locale.region ?? first + second);
		}
	}
	return table;
}

/** A getter in older runtimes, a method in newer ones, absent in some browsers. */
function zonesOf(
	locale: Intl.Locale & { timeZones?: string[]; getTimeZones?: () => string[] | undefined }
): readonly string[] {
	return locale.getTimeZones?.() ?? locale.timeZones ?? [];
}

/** Country in which a zone lies, for the suggestion of a limit set; null when the zone tells none ("UTC"). */
export function countryOfTimeZone(zone: string): string | null {
	countries ??= countryTable();
	return countries.get(zone) ?? null;
}
