import type { Content } from 'pdfmake/interfaces';
import { formatMoment } from '../../../report/dates';
import type { ReportCapture, ReportTable } from '../../../report/report-model';
import { formatDuration, formatNumber } from '../../../units/format';
import { INK_SOFT } from '../print-style';
import type { SheetContext } from '../sheet-context';
import { facts, figures, heading, rich, ruledTable, soft } from '../typeset';

const hash = (sha256: string): Content => ({
	text: figures(sha256.match(/.{32}/g)?.join(' ') ?? sha256),
	fontSize: 6.6
});

function captureBlock({ model, phase }: SheetContext, capture: ReportCapture): Content[] {
	const started =
		capture.startedAt === null ? 'start not known' : formatMoment(capture.startedAt, model.site.timeZone);
	const rate =
		capture.samplingRate_Hz === null
			? ''
			: `, ${formatNumber(capture.samplingRate_Hz, { decimals: 0 })} samples a second`;
	return [
		...heading(
			capture.name,
			`${capture.format} ${capture.variant}, ${started}, ${formatDuration(capture.duration_s)}${rate}, ${formatNumber(capture.windowCount, { decimals: 0 })} ${capture.samplingRate_Hz === null ? 'intervals' : 'windows'}.`
		),
		ruledTable(
			[
				{ head: 'File', width: 150 },
				{ head: 'Bytes', width: 60, align: 'right', mono: true },
				{ head: 'SHA-256', width: '*' }
			],
			capture.files.map((file) => [
				file.name,
				formatNumber(file.size_bytes, { decimals: 0 }),
				hash(file.sha256)
			]),
			{ margin: [0, 0, 0, 4] }
		),
		ruledTable(
			[
				{ head: 'Channel', width: '*' },
				{ head: 'Quantity', width: 80 },
				{ head: 'Phase', width: 80 },
				{ head: 'Factor to primary', width: 100, align: 'right', mono: true }
			],
			capture.channels.map((c) => [
				c.channel,
				c.quantity,
				phase(c.phase),
				String(Number(c.toPrimary.toPrecision(10)))
			])
		)
	];
}

/** Appendix A: where every figure comes from. */
export function lineageSection(context: SheetContext): Content[] {
	const { lineage } = context.model;
	return [
		facts([
			['Engine version', lineage.engineVersion],
			['Assessment', lineage.assessmentId],
			['Limit set', `${lineage.limitSet.title}, library no. ${lineage.limitSet.id}`],
			['Source file of the limit set', hash(lineage.limitSet.sourceSha256)],
			['Data hash', hash(lineage.dataSha256)]
		]),
		...lineage.captures.flatMap((capture) => captureBlock(context, capture)),
		...heading('Limit rows used'),
		ruledTable(
			[
				{ head: 'Row', width: 34, mono: true },
				{ head: 'Table', width: 150 },
				{ head: 'Clause', width: 60 },
				{ head: 'Covers', width: '*' },
				{ head: 'Limit %', width: 44, align: 'right', mono: true },
				{ head: 'Provenance', width: 74 }
			],
			lineage.limitRows.map((row) => [
				String(row.id),
				row.table,
				row.clause,
				row.what,
				row.limit_pct === null ? 'formula' : formatNumber(row.limit_pct),
				row.provenance.replace('-', ' ')
			])
		),
		soft(
			'The data hash is taken over the hashes of the captures, their mapping, the engine version, the limit rows and every figure of appendix B. Limits and clause numbers are taken from the limit library of the product; the purchased standard prevails.'
		)
	];
}

function everyValue({ phase }: SheetContext, table: ReportTable): Content[] {
	const assessed = table.rules.filter((rule) => rule.rows.some((row) => row.verdict !== 'not-assessed'));
	return assessed.flatMap((rule) => [
		{
			text: rich(`${table.title}: ${rule.text}`),
			bold: true,
			fontSize: 8.5,
			margin: [0, 6, 0, 2] as [number, number, number, number]
		},
		ruledTable(
			[
				{ head: 'Order', width: 28 },
				...table.phases.map((p) => ({
					head: `${phase(p)} %`,
					width: '*',
					align: 'right' as const,
					mono: true
				})),
				{ head: 'Limit %', width: 40, align: 'right', mono: true },
				{ head: 'U %', width: 36, align: 'right', mono: true },
				{ head: 'Intervals', width: 38, align: 'right', mono: true },
				{ head: 'Flagged', width: 34, align: 'right', mono: true },
				{ head: 'Row', width: 24, align: 'right', mono: true },
				{ head: 'Verdict of the worst phase', width: 92 }
			],
			rule.rows.map((row) => [
				row.label,
				...table.phases.map((p) =>
					formatNumber(row.cells.find((c) => c.phase === p)?.value_pct, { decimals: 4 })
				),
				formatNumber(row.limit_pct, { decimals: 4 }),
				formatNumber(row.uncertainty_pct, { decimals: 4 }),
				formatNumber(row.intervalCount, { decimals: 0 }),
				formatNumber(row.flaggedCount, { decimals: 0 }),
				row.limitRowId === null ? '–' : String(row.limitRowId),
				row.verdict.replace(/-inside-/, ', inside ').replace('not-', 'not ')
			]),
			{ fontSize: 6.8 }
		)
	]);
}

/** Appendix B: every value with four decimals, its uncertainty and the row it was held against. */
export function allValuesSection(context: SheetContext): Content[] {
	return [
		{
			text: rich(
				'U is the expanded uncertainty (k = 2) of the worst phase, in percentage points of the same basis.'
			),
			color: INK_SOFT,
			fontSize: 8.5
		},
		...context.model.tables.flatMap((table) => everyValue(context, table))
	];
}
