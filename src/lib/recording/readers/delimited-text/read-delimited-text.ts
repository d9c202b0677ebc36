import type { Result } from '../../../result';
import type { CaptureFile, ReadProblem, ReadRemark, Recording, Trend } from '../../recording';
import { note, refuse } from '../read-problem';
import { asciiCompatibleBytes, decodeText, ENCODING_NAMES } from '../text-decoding';
import { buildTrend } from './build-trend';
import { buildWaveform } from './build-waveform';
import { isUnitWord } from './heading-text';
import { preambleFacts } from './preamble';
import { guessDateOrder } from './stamp-text';
import { readBody } from './table-body';
import { findTimeColumns, isRowCounter, tableColumns, type TableColumn } from './table-columns';
import { detectLayout, type HeadLine, type TableLayout } from './table-layout';
import { medianStep_s, timeAxisOf } from './time-axis';

export interface DelimitedTextOptions {
	/** Rate for tables without any time of their own, as a person states it. */
	samplingRate_Hz?: number;
}

/** Bytes from the top in which headings and layout must show. */
const HEAD_BYTES = 262_144;

/** Rows at least this far apart are values per interval and no samples. */
const TREND_STEP_S = 0.999;

const SEPARATOR_WORDS: Record<TableLayout['separator'], string> = {
	',': 'comma separated',
	';': 'semicolon separated',
	'\t': 'tab separated',
	'|': 'bar separated',
	' ': 'space separated'
};

/**
 * Reads a table of numbers in plain text: samples of a waveform, or a log of values per interval.
 * Separator, decimal sign, headings, units and time column are found from the text itself.
 */
export function readDelimitedText(
	files: CaptureFile[],
	options: DelimitedTextOptions = {}
): Result<Recording | Trend, ReadProblem> {
	const file = files[0];
	if (file === undefined || file.bytes.length === 0)
		return refuse(
			'file-empty',
			file?.name ?? '',
			null,
			`${file?.name ?? 'The file'} is empty (0 bytes); a table of numbers was expected.`
		);
	const { bytes, wasUtf16 } = asciiCompatibleBytes(file.bytes);
	const zeroAt = bytes.subarray(0, 4096).indexOf(0);
	if (zeroAt >= 0)
		return refuse(
			'not-text',
			file.name,
			`byte ${zeroAt}`,
			`${file.name}, byte ${zeroAt}: a table in plain text was expected, but the file holds binary data.`
		);
	const head = headLines(bytes);
	const remarks: ReadRemark[] = [];
	if (wasUtf16) remarks.push(note('text-encoding', `${file.name} is written in UTF-16.`));
	else if (head.encoding !== 'utf-8')
		remarks.push(
			note(
				'text-encoding',
				`${file.name} is not written in UTF-8; its headings were read as ${ENCODING_NAMES[head.encoding]}.`
			)
		);
	const layout = detectLayout(head.lines, isUnitWord);
	if (layout === null)
		return refuse(
			'no-table',
			file.name,
			'line 1',
			`${file.name}: no table of numbers was found; rows of numbers separated by commas, semicolons, tabs or blanks were expected from line 1 on, with or without lines above them.`
		);
	return readTable(file.name, bytes, layout, head.lines, remarks, options);
}

/** Lines of the first part of a file, cut at a line end, with numbers and places. */
function headLines(bytes: Uint8Array): {
	lines: HeadLine[];
	encoding: ReturnType<typeof decodeText>['encoding'];
} {
	let end = bytes.length;
	if (bytes.length > HEAD_BYTES) {
		end = HEAD_BYTES;
		while (end > 0 && bytes[end - 1] !== 0x0a && bytes[end - 1] !== 0x0d) end--;
		if (end === 0) end = HEAD_BYTES;
	}
	const { text, encoding } = decodeText(bytes.subarray(0, end));
	const texts = text.split(/\r\n|\n|\r/);
	const lines: HeadLine[] = [];
	let start = 0;
	for (let at = 0; at <= end; at++) {
		if (at < end && bytes[at] !== 0x0a && bytes[at] !== 0x0d) continue;
		lines.push({ text: texts[lines.length] ?? '', number: lines.length + 1, start });
		if (bytes[at] === 0x0d && bytes[at + 1] === 0x0a && at + 1 < end) at++;
		start = at + 1;
	}
	return { lines, encoding };
}

function readTable(
	file: string,
	bytes: Uint8Array,
	layout: TableLayout,
	lines: HeadLine[],
	remarks: ReadRemark[],
	options: DelimitedTextOptions
): Result<Recording | Trend, ReadProblem> {
	const columns = tableColumns(layout, lines);
	const time = findTimeColumns(columns);
	const first = lines[layout.firstRow] as HeadLine;
	const body = readBody(bytes, {
		file,
		separator: layout.separator,
		decimal: layout.decimal,
		dateOrder: guessDateOrder(time?.columns[0]?.sample ?? []).order,
		kinds: columns.map(({ kind }) => kind),
		start: first.start,
		firstLine: first.number
	});
	if (!body.ok) return body;
	const common = {
		file,
		variant: `${SEPARATOR_WORDS[layout.separator]}${layout.decimal === ',' ? ', decimal comma' : ''}`,
		columns: valueColumns(columns, time?.columns ?? []),
		body: body.value,
		preamble: preambleFacts(layout),
		remarks
	};
	const axis = time === null ? null : timeAxisOf(file, time, body.value);
	if (axis !== null && !axis.ok) return axis;
	const interval_s = axis === null ? NaN : Number(medianStep_s(axis.value.times_s).toPrecision(6));
	if (axis !== null && interval_s >= TREND_STEP_S) {
		const flagColumn = columns.find(({ kind }) => kind === 'flag') ?? null;
		return buildTrend({ ...common, axis: axis.value, interval_s, flagColumn });
	}
	return buildWaveform({
		...common,
		axis: axis?.value ?? null,
		statedSamplingRate_Hz: options.samplingRate_Hz ?? null
	});
}

/** Columns of measured values: not the time, no flags, no row numbers, no text, nothing that is empty throughout. */
function valueColumns(columns: TableColumn[], timeColumns: TableColumn[]): TableColumn[] {
	return columns.filter((column, position) => {
		const isTime = timeColumns.includes(column);
		const isCounter = position === 0 && isRowCounter(column);
		return column.kind === 'number' && !isTime && !isCounter;
	});
}
