import { ok, type Result } from '../../../result';
import type { ReadProblem, ReadRemark } from '../../recording';
import { rowsInFile } from '../../sample-source';
import type { SampleScratch } from '../../sample-scratch';
import { counted, refuse, warning } from '../read-problem';
import { AsciiRows } from './ascii-rows';
import type { ComtradeData, ComtradeHeader } from './comtrade-header';
import type { DataPart } from './data-part';
import { stampsInFile } from './stamp-column';

/** Bytes of text taken in at a time. */
const BLOCK_BYTES = 1 << 18;

/** A line longer than this is none: no configuration lists so many channels. */
const LONGEST_LINE_BYTES = 1 << 25;

export interface AsciiData extends ComtradeData {
	/** Every value keeps the limits that the configuration states for its channel. */
	keepsLimits: boolean;
}

/**
 * ASCII data, decoded into rows of scratch; the text is never held as a whole. Rows that are damaged in one place keep their
 * other values; what is damaged or missing becomes NaN and is remarked on with its line.
 */
export function readAsciiData(
	part: DataPart,
	header: ComtradeHeader,
	scratch: SampleScratch
): Result<AsciiData, ReadProblem> {
	const rowsInto = scratch.create();
	const stampsInto = scratch.create();
	const rows = new AsciiRows(header, part.firstLine, rowsInto, stampsInto);
	const remarks: ReadRemark[] = [];
	const outcome = takeText(part, rows);
	rows.finish();
	if (outcome === 'line too long')
		return refuse(
			'dat-columns',
			part.file.name,
			`line ${rows.line}`,
			`${part.file.name}, line ${rows.line} does not end within ${LONGEST_LINE_BYTES} bytes; a row of ${rows.fieldCount} numbers was expected there, as ${header.file} describes.`
		);
	const { text, short } = rows.faults;
	if (rows.isTooNarrow)
		return refuse(
			'dat-columns',
			part.file.name,
			`line ${part.firstLine}`,
			`${part.file.name} has rows too short for the ${header.analogues.length} analogue channels that ${header.file} lists; check that the two files belong together.`
		);
	if (rows.row === 0 && outcome !== 'cut')
		return refuse(
			'dat-empty',
			part.file.name,
			`line ${part.firstLine}`,
			`${part.file.name} holds no data: a row with ${rows.fieldCount} values was expected on line ${part.firstLine}.`
		);
	if (outcome === 'cut')
		remarks.push(
			warning(
				'dat-truncated',
				`${part.file.name} ends in the middle of line ${rows.line} (${rows.lastRowFields} of ${rows.fieldCount} values); that row was left out.`
			)
		);
	if (rows.row === short.count || text.count >= rows.row * header.analogues.length)
		return misfit(part, header, rows);
	describeFaults(part.file.name, rows, remarks);
	const channels = header.analogues.map((_, channel) => channel);
	const layout = {
		format: 'float64' as const,
		rowBytes: 8 * channels.length,
		offsets: channels.map((channel) => 8 * channel),
		factors: channels.map(() => 1),
		additions: channels.map(() => 0)
	};
	return ok({
		sampleCount: rows.row,
		stamps: stampsInFile(stampsInto.seal()),
		samples: rowsInFile(layout, rowsInto.seal(), 0),
		survey: () => ({ missingCounts: rows.missingCounts, statusActivity: rows.status.activity() }),
		keepsLimits: !rows.leftLimits,
		remarks
	});
}

type Outcome = 'whole' | 'cut' | 'line too long';

/** Hands the text to the rows, whole lines at a time. */
function takeText({ file, start, end }: DataPart, rows: AsciiRows): Outcome {
	// One byte more, so that a last line without an end can be given one.
	let buffer = new Uint8Array(BLOCK_BYTES + 1);
	let held = 0;
	let position = start;
	while (position < end && !rows.hasEnded) {
		const count = Math.min(buffer.length - 1 - held, end - position);
		file.read(position, buffer.subarray(held, held + count));
		position += count;
		const filled = held + count;
		let whole = filled;
		while (whole > held && buffer[whole - 1] !== 0x0a && buffer[whole - 1] !== 0x0d) whole--;
		if (whole === held) whole = 0;
		if (whole > 0) rows.take(buffer, 0, whole);
		buffer.copyWithin(0, whole, filled);
		held = filled - whole;
		if (held < buffer.length - 1) continue;
		if (buffer.length > LONGEST_LINE_BYTES) return 'line too long';
		const wider = new Uint8Array(2 * buffer.length);
		wider.set(buffer.subarray(0, held));
		buffer = wider;
	}
	if (held === 0 || rows.hasEnded) return 'whole';
	buffer[held] = 0x0a;
	return rows.take(buffer, 0, held + 1, true) ? 'cut' : 'whole';
}

function misfit(part: DataPart, header: ComtradeHeader, rows: AsciiRows) {
	const { text, short } = rows.faults;
	const found = short.first || text.first || `line ${rows.line} has ${rows.lastRowFields}`;
	return refuse(
		'dat-columns',
		part.file.name,
		found.startsWith('line') ? (found.split(' has')[0] ?? null) : null,
		`${part.file.name} does not fit ${header.file}: ${rows.fieldCount} numbers per row were expected (number, time stamp, ${header.analogues.length} analogue, ${header.statuses.length} status), but ${found}.`
	);
}

function describeFaults(file: string, { faults, fieldCount }: AsciiRows, remarks: ReadRemark[]): void {
	const { text, short, long } = faults;
	if (text.count > 0)
		remarks.push(
			warning(
				'dat-not-a-number',
				`${file}: ${counted(text.count, 'value')} could not be read as a number, first ${text.first}; they count as missing.`
			)
		);
	if (short.count > 0)
		remarks.push(
			warning(
				'dat-row-short',
				`${file}: ${counted(short.count, 'row')} with too few values (${fieldCount} were expected, ${short.first}); what is not there counts as missing.`
			)
		);
	if (long.count > 0)
		remarks.push(
			warning(
				'dat-row-long',
				`${file}: ${counted(long.count, 'row')} with too many values (${fieldCount} were expected, ${long.first}); the surplus was ignored.`
			)
		);
}
