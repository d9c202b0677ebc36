/** The data behind a chart, as a table on the page and as a file to download. */
export interface ChartTable {
	columns: readonly { label: string; numeric?: boolean; digits?: number }[];
	/** null is "no data", never zero. */
	rows: readonly (readonly (string | number | null)[])[];
}

export function formatChartCell(value: string | number | null, digits = 3): string {
	if (value === null || (typeof value === 'number' && Number.isNaN(value))) return 'no data';
	return typeof value === 'number' ? value.toFixed(digits) : value;
}

/**
 * RFC 4180: CRLF, fields with comma, quote or line break in quotes. Figures stand unrounded, missing ones empty.
 * A text that a spreadsheet would take for a formula gets a leading apostrophe.
 */
export function chartTableToCsv(table: ChartTable): string {
	const lines = [table.columns.map((column) => csvField(column.label))];
	for (const row of table.rows) lines.push(row.map(csvField));
	return lines.map((fields) => fields.join(',')).join('\r\n') + '\r\n';
}

function csvField(value: string | number | null): string {
	if (value === null) return '';
	if (typeof value === 'number') return Number.isNaN(value) ? '' : String(value);
	const harmless = /^[=+\-@\t\r]/.test(value) ? `'${value}` : value;
	return /[",\r\n]/.test(harmless) ? `"${harmless.replaceAll('"', '""')}"` : harmless;
}
