import { ok, type Result } from '../../../result';
import type { ReadProblem, ReadRemark } from '../../recording';
import { warning } from '../read-problem';
import { finiteNumber, nextRow, unexpected, wholeNumber, type CfgCursor, type CfgRow } from './cfg-lines';
import type { AnalogueLine, StatusLine } from './comtrade-header';

const ANALOGUE_FIELDS = 13;
const ANALOGUE_FIELDS_1991 = 10;

/** Line 2: "TT,nnA,mmD". The letters count more than the order, and the parts count more than the total. */
export function parseChannelCounts(
	cursor: CfgCursor,
	remarks: ReadRemark[]
): Result<{ analogue: number; status: number; line: number }, ReadProblem> {
	const expected = 'the channel counts, such as “8,4A,4D”,';
	const row = nextRow(cursor, expected);
	if (!row.ok) return row;
	const total = wholeNumber(row.value.fields[0] ?? '');
	let analogue: number | null = null;
	let status: number | null = null;
	for (const field of row.value.fields.slice(1, 3)) {
		const match = /^(\d{1,6})\s*([AD])$/i.exec(field);
		if (match === null) continue;
		if ((match[2] ?? '').toUpperCase() === 'A') analogue = Number(match[1]);
		else status = Number(match[1]);
	}
	if (analogue === null || status === null)
		return unexpected(cursor, row.value, 'cfg-channel-counts', expected);
	if (total !== analogue + status) {
		const says = total === null ? 'gives no readable total' : `gives ${total} channels in all`;
		remarks.push(
			warning(
				'channel-total-mismatch',
				`${cursor.file}, line ${row.value.line} ${says}, but ${analogue} analogue and ${status} status channels; the two parts were used.`
			)
		);
	}
	return ok({ analogue, status, line: row.value.line });
}

/** "1,IA,A,GER 1,A,2.458,0,0,-32768,32767,2500,5,P"; the last three are absent in the 1991 form. */
export function parseAnalogueLine(
	cursor: CfgCursor,
	position: number,
	count: number
): Result<AnalogueLine, ReadProblem> {
	const expected = `analogue channel ${position} of ${count} (number, name, phase, component, unit, a, b, skew, minimum, maximum, …)`;
	const row = nextRow(cursor, expected);
	if (!row.ok) return row;
	const { fields } = row.value;
	while (fields.length > ANALOGUE_FIELDS && fields[fields.length - 1] === '') fields.pop();
	if (fields.length > ANALOGUE_FIELDS)
		return unexpected(
			cursor,
			row.value,
			'cfg-analogue-fields',
			`${expected} in ${ANALOGUE_FIELDS} fields with decimal points (${fields.length} fields stand there; decimal commas and commas inside names cannot be told from separators)`
		);
	if (fields.length < ANALOGUE_FIELDS_1991)
		return unexpected(cursor, row.value, 'cfg-analogue-fields', expected);
	return analogueOf(cursor, row.value, expected);
}

function analogueOf(cursor: CfgCursor, row: CfgRow, expected: string): Result<AnalogueLine, ReadProblem> {
	const field = (index: number) => row.fields[index] ?? '';
	const a = scaleNumber(field(5));
	const b = field(6) === '' ? 0 : scaleNumber(field(6));
	if (a === null || b === null)
		return unexpected(
			cursor,
			row,
			'cfg-scale',
			`a number as the ${a === null ? 'multiplier a (field 6)' : 'offset b (field 7)'} of ${expected}`
		);
	return ok({
		name: field(1),
		phaseField: field(2),
		unit: field(4),
		a,
		b,
		skew_us: finiteNumber(field(7)) ?? 0,
		minimum: finiteNumber(field(8)),
		maximum: finiteNumber(field(9)),
		ratio: ratioOf(finiteNumber(field(10)), finiteNumber(field(11))),
		valuesAre: sideOf(field(12))
	});
}

/** Nothing that is measured has a value as great as this; with it samples would be infinite. */
const GREATEST_SCALE = 1e30;

function scaleNumber(text: string): number | null {
	const value = finiteNumber(text);
	return value !== null && Math.abs(value) < GREATEST_SCALE ? value : null;
}

function ratioOf(primary: number | null, secondary: number | null): AnalogueLine['ratio'] {
	return primary !== null && secondary !== null && primary > 0 && secondary > 0
		? { primary, secondary }
		: null;
}

function sideOf(flag: string): AnalogueLine['valuesAre'] {
	switch (flag.toUpperCase()) {
		case 'P':
			return 'primary';
		case 'S':
			return 'secondary';
		default:
			return 'unknown';
	}
}

/** "1,51A,,Line123,0", or "1,51A,0" in the 1991 form. */
export function parseStatusLine(
	cursor: CfgCursor,
	position: number,
	count: number
): Result<StatusLine, ReadProblem> {
	const expected = `status channel ${position} of ${count} (number, name, …, normal state)`;
	const row = nextRow(cursor, expected);
	if (!row.ok) return row;
	const { fields } = row.value;
	if (fields.length < 2) return unexpected(cursor, row.value, 'cfg-status-line', expected);
	const normal = fields[fields.length >= 5 ? 4 : 2];
	return ok({
		name: fields[1] ?? '',
		normalState: normal === '0' ? 0 : normal === '1' ? 1 : null
	});
}
