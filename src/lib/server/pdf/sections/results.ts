import type { Content, TableCell } from 'pdfmake/interfaces';
import { formatCurrent, formatNumber, formatShare } from '../../../units/format';
import { decimalsBeside } from '../../../units/format-beside';
import type { ReportRow, ReportRule, ReportTable } from '../../../report/report-model';
import { isNotableLevel } from '../../../report/verdict-table';
import type { Phase } from '../../../recording/phase';
import { contentWidth, INK, INK_SOFT, OXIDE_WASH, TONE } from '../print-style';
import type { SheetContext } from '../sheet-context';
import { bullets, figures, heading, paragraph, rich, ruledTable, soft, verdictTag } from '../typeset';

function worstOf(
	values: readonly { phase: Phase; value_pct: number }[]
): { phase: Phase; value_pct: number } | null {
	// The neutral is reported with the findings and judged nowhere.
	const lines = values.filter(({ phase }) => phase !== 'N');
	return lines.reduce<{ phase: Phase; value_pct: number } | null>(
		(worst, value) => (worst === null || value.value_pct > worst.value_pct ? value : worst),
		null
	);
}

function keyFigure(label: string, value: string, note: string): TableCell {
	return {
		stack: [
			{ text: rich(label), fontSize: 7.5, color: INK_SOFT },
			{ text: figures(value), fontSize: 14, margin: [0, 2, 0, 1] },
			{ text: rich(note), fontSize: 7.5, color: INK_SOFT }
		]
	};
}

function keyFigures({ model, phase }: SheetContext): Content {
	const { headline } = model.verdict;
	const figure = (
		label: string,
		values: readonly { phase: Phase; value_pct: number }[],
		note: string
	): TableCell => {
		const worst = worstOf(values);
		return worst === null
			? keyFigure(label, '–', 'not measured')
			: keyFigure(label, `${formatNumber(worst.value_pct)} %`, `phase ${phase(worst.phase)}, ${note}`);
	};
	return {
		table: {
			widths: ['*', '*', '*', '*'],
			body: [
				[
					figure('Current TDD', headline.tdd, 'of I_L'),
					figure('Current THD', headline.currentThd, 'of the fundamental'),
					figure('Voltage THD', headline.voltageThd, 'of the fundamental'),
					keyFigure(
						'Demand current I_L',
						formatCurrent(model.point.demandCurrent_A),
						model.point.shortCircuitRatio === null
							? 'I_sc/I_L not known'
							: `I_sc/I_L ${formatNumber(model.point.shortCircuitRatio, { decimals: 1 })}`
					)
				]
			]
		},
		margin: [0, 4, 0, 10],
		layout: {
			hLineWidth: () => 0.7,
			vLineWidth: () => 0,
			hLineColor: () => INK,
			paddingLeft: () => 2,
			paddingRight: () => 6,
			paddingTop: () => 5,
			paddingBottom: () => 5
		}
	};
}

/** One page: what each table says, which figure governs it, what is missing. */
export function dashboardSection(context: SheetContext): Content[] {
	const { model, phase } = context;
	const rows = model.tables.map((table) => {
		const worst = worstRow(table);
		return [
			table.title,
			worst === null ? 'nothing assessed' : `${worst.label}, phase ${phase(worst.worstPhase)}`,
			worst === null ? '–' : valueText(worst, worst.worstPhase),
			worst === null ? '–' : limitText(worst),
			utilisationText(worst?.utilisation ?? null),
			verdictTag(table.verdict, { advisory: model.verdict.advisory })
		];
	});
	return [
		{
			...(verdictTag(model.verdict.verdict, { size: 10, advisory: model.verdict.advisory }) as object),
			margin: [0, 0, 0, 6]
		} as Content,
		paragraph(model.verdict.sentence, { fontSize: 11.5 }),
		keyFigures(context),
		...heading('Table by table', 'The figure that comes nearest to its limit, or goes furthest beyond it.'),
		ruledTable(
			[
				{ head: 'Table', width: '*' },
				{ head: 'Governing figure', width: 100 },
				{ head: 'Value %', width: 48, align: 'right', mono: true },
				{ head: 'Limit %', width: 48, align: 'right', mono: true },
				{ head: 'Utilisation %', width: 54, align: 'right', mono: true },
				{ head: 'Verdict', width: 126 }
			],
			rows
		),
		...(model.verdict.overLimit.length === 0
			? []
			: [paragraph(`Over their limit: ${model.verdict.overLimit.join(', ')}.`)]),
		...(model.verdict.missing.length === 0
			? []
			: [...heading('What is missing, and what it is needed for'), bullets(model.verdict.missing)]),
		soft(
			`Intervals used and flagged: ${formatNumber(model.quality.intervalTotal, { decimals: 0 })} in all, ${formatNumber(model.quality.flaggedTotal, { decimals: 0 })} flagged.`
		)
	];
}

function worstRow(table: ReportTable): ReportRow | null {
	return table.rules
		.flatMap((rule) => rule.rows)
		.reduce<ReportRow | null>(
			(worst, row) =>
				row.utilisation !== null && (worst === null || row.utilisation > (worst.utilisation ?? -1))
					? row
					: worst,
			null
		);
}

function valueText(row: ReportRow, phase: Phase): string {
	const value = row.cells.find((cell) => cell.phase === phase)?.value_pct ?? null;
	if (value === null) return '–';
	return formatNumber(value, { decimals: row.limit_pct === null ? 2 : decimalsBeside(value, row.limit_pct) });
}

function limitText(row: ReportRow): string {
	if (row.limit_pct === null) return '–';
	const decimals = Math.max(
		...row.cells.map((cell) =>
			cell.value_pct === null ? 2 : decimalsBeside(cell.value_pct, row.limit_pct ?? NaN)
		)
	);
	return formatNumber(row.limit_pct, { decimals });
}

function utilisationText(utilisation: number | null): string {
	return utilisation === null
		? '–'
		: formatNumber(utilisation * 100, { decimals: decimalsBeside(utilisation * 100, 100, 0) });
}

function ruleTable({ model, phase }: SheetContext, table: ReportTable, rule: ReportRule): Content[] {
	const notable = rule.rows.filter((row) => isNotableLevel(row.order === null, row.verdict, row.utilisation));
	const left = rule.rows.length - notable.length;
	const cells = (row: ReportRow): (string | Content)[] => [
		row.label,
		...table.phases.map((p): string | Content => {
			const over = row.cells.find((c) => c.phase === p)?.verdict === 'exceeds';
			return over
				? {
						text: figures(valueText(row, p)),
						fontSize: 7.7,
						alignment: 'right',
						color: TONE.oxide.text,
						bold: true
					}
				: valueText(row, p);
		}),
		limitText(row),
		utilisationText(row.utilisation),
		verdictTag(row.verdict, { advisory: model.verdict.advisory })
	];
	return [
		...heading(sentenceCase(rule.text), `Percent ${table.ofWhat}. Utilisation is that of the worst phase.`),
		ruledTable(
			[
				{ head: 'Order', width: 36 },
				...table.phases.map((p) => ({
					head: `Phase ${phase(p)}`,
					width: '*',
					align: 'right' as const,
					mono: true
				})),
				{ head: 'Limit', width: 48, align: 'right', mono: true },
				{ head: 'Utilisation %', width: 56, align: 'right', mono: true },
				{ head: 'Verdict', width: 128 }
			],
			notable.map(cells),
			{ wash: (i) => (notable[i]?.verdict === 'exceeds' ? OXIDE_WASH : null), margin: [0, 0, 0, 4] }
		),
		soft(
			left === 0
				? 'Every order is listed.'
				: `${left} further ${left === 1 ? 'order lies' : 'orders lie'} below a tenth of the limit and ${left === 1 ? 'is' : 'are'} compliant; all values stand in appendix B.`
		)
	];
}

function notAssessed({ phase }: SheetContext, rule: ReportRule): Content[] {
	const reasons = new Map<string, string[]>();
	for (const row of rule.rows.filter((r) => r.verdict === 'not-assessed'))
		reasons.set(row.reason, [...(reasons.get(row.reason) ?? []), `${row.label} (${phase(row.worstPhase)})`]);
	if (reasons.size === 0) return [];
	return [
		soft('Not assessed, and why:', { margin: [0, 2, 0, 2] }),
		bullets(
			[...reasons].map(
				([reason, rows]) => `${rows.length > 6 ? `${rows.length} rows` : rows.join(', ')}: ${reason}`
			)
		)
	];
}

/** One table of the standard: spectrum, then a table for each statistical rule. */
export function tableSection(context: SheetContext, table: ReportTable): Content[] {
	const { model, drawings } = context;
	const at = model.spectra.findIndex((spectrum) => spectrum.tableKey === table.key);
	const spectrum = model.spectra[at];
	const drawing = drawings.spectra[at];
	const assessed = table.rules.flatMap((rule) => rule.rows.filter((row) => row.verdict !== 'not-assessed'));
	const coverage = Math.min(...assessed.map((row) => row.coverage), 1);
	return [
		paragraph(`${table.title}, ${clauseWords(table.clause)}. ${table.selection}`),
		soft(
			`Evidence: ${table.evidence}${table.evidence === 'partial' ? `, at least ${formatShare(coverage)} of the period covered` : ''}.`
		),
		...(spectrum && drawing
			? [
					...heading(spectrum.title),
					{ svg: drawing, width: contentWidth(model.practice.paper), margin: [0, 0, 0, 4] } as Content
				]
			: []),
		...table.rules.flatMap((rule) =>
			rule.rows.every((row) => row.verdict === 'not-assessed')
				? [...heading(sentenceCase(rule.text)), ...notAssessed(context, rule)]
				: [...ruleTable(context, table, rule), ...notAssessed(context, rule)]
		)
	];
}

function sentenceCase(text: string): string {
	return text.charAt(0).toUpperCase() + text.slice(1);
}

function clauseWords(clause: string): string {
	return /^\d/.test(clause) ? `clause ${clause}` : clause;
}

/** Waveform of the worst window and the trends, where there are any. */
export function recordingsSection(context: SheetContext): Content[] {
	const { model, drawings } = context;
	const width = contentWidth(model.practice.paper);
	return [
		...(model.waveform === null
			? []
			: [
					...heading(model.waveform.title, `From ${model.waveform.captureName}. Primary values.`),
					...drawings.waveform.map((svg): Content => ({ svg, width }))
				]),
		...model.trends.flatMap((trend, i) => [
			...heading(trend.title, `Percent ${trend.ofWhat}.`),
			{ svg: drawings.trends[i] ?? '', width } as Content
		])
	];
}
