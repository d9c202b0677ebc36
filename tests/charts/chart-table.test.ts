import { describe, expect, it } from 'vitest';
import { chartTableToCsv, formatChartCell } from '$lib/charts/chart-table';

describe('chartTableToCsv', () => {
	// RFC 4180, section 2: CRLF line ends (rule 1), quotes round commas, quotes and breaks (6), quotes doubled (7).
	it('quotes as RFC 4180 says and ends lines with CRLF', () => {
		const csv = chartTableToCsv({
			columns: [{ label: 'Order' }, { label: 'A, % of "I"' }],
			rows: [[5, 'two\nlines']]
		});
		expect(csv).toBe('Order,"A, % of ""I"""\r\n5,"two\nlines"\r\n');
	});

	it('keeps figures unrounded, zero as zero and no data empty', () => {
		const csv = chartTableToCsv({
			columns: [{ label: 'v' }, { label: 'w' }, { label: 'x' }],
			rows: [[7.000000001, 0, null]]
		});
		expect(csv.split('\r\n')[1]).toBe('7.000000001,0,');
	});

	it('does not hand a formula to a spreadsheet', () => {
		const csv = chartTableToCsv({ columns: [{ label: 'Site' }], rows: [['=HYPERLINK("x")']] });
		expect(csv.split('\r\n')[1]).toBe('"\'=HYPERLINK(""x"")"');
	});
});

describe('formatChartCell', () => {
	it('says "no data" for what is missing, never zero', () => {
		expect(formatChartCell(null)).toBe('no data');
		expect(formatChartCell(Number.NaN)).toBe('no data');
		expect(formatChartCell(0, 1)).toBe('0.0');
	});
});
