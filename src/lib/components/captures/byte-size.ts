/** 1_234_567 → "1.2 MB"; decimal prefixes, as file managers print them. */
export function formatBytes(size_bytes: number): string {
	const units = ['B', 'kB', 'MB', 'GB'];
	let value = size_bytes;
	let unit = 0;
	while (value >= 1000 && unit < units.length - 1) {
		value /= 1000;
		unit++;
	}
	return `${unit === 0 ? value : value.toFixed(value < 10 ? 1 : 0)}\u00a0${units[unit]}`;
}
