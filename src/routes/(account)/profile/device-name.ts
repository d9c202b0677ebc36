const BROWSERS: readonly [pattern: RegExp, name: string][] = [
	[/Edg\//, 'Edge'],
	[/OPR\//, 'Opera'],
	[/Firefox\//, 'Firefox'],
	[/Chrom(e|ium)\//, 'Chrome'],
	[/Safari\//, 'Safari']
];
const SYSTEMS: readonly [pattern: RegExp, name: string][] = [
	[/Windows/, 'Windows'],
	[/Android/, 'Android'],
	[/iPhone|iPad/, 'iOS'],
	[/Mac OS X/, 'macOS'],
	[/Linux/, 'Linux']
];

/** "Firefox on Linux": enough for a person to tell their devices apart. */
export function deviceName(userAgent: string): string {
	const browser = BROWSERS.find(([pattern]) => pattern.test(userAgent))?.[1];
	const system = SYSTEMS.find(([pattern]) => pattern.test(userAgent))?.[1];
	if (!browser && !system) return userAgent === '' ? 'Unknown device' : userAgent.slice(0, 60);
	return [browser ?? 'Browser', system].filter(Boolean).join(' on ');
}
