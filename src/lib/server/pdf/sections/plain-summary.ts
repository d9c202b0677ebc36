import type { Content } from 'pdfmake/interfaces';
import { VERDICT_WORDS } from '../../../assessment/verdict-words';
import { formatPctPair } from '../../../units/format-beside';
import { formatCalendarDate } from '../../../report/dates';
import { allowedMeasuredSvg } from '../allowed-measured-drawing';
import { contentWidth, INK_SOFT } from '../print-style';
import type { SheetContext } from '../sheet-context';
import { heading, paragraphs, rich, ruledTable, soft, verdictTag } from '../typeset';

function comparison({ model, phase }: SheetContext): Content[] {
	const worst = model.verdict.worst;
	if (worst === null) return [];
	const { value, reference } = formatPctPair(worst.value_pct, worst.limit_pct, { decimals: 1 });
	const tone = VERDICT_WORDS[worst.verdict].tone;
	const width = contentWidth(model.practice.paper);
	return [
		{
			text: rich(`${worst.label}, phase ${phase(worst.phase)}, in percent ${worst.ofWhat}`),
			fontSize: 8.5,
			color: INK_SOFT,
			margin: [0, 10, 0, 4]
		},
		{
			svg: allowedMeasuredSvg(
				{
					allowed_pct: worst.limit_pct,
					measured_pct: worst.value_pct,
					allowedText: reference,
					measuredText: value,
					tone: tone === 'slate' ? 'ochre' : tone
				},
				width
			),
			width
		},
		soft(`${worst.statistic[0]?.toUpperCase() ?? ''}${worst.statistic.slice(1)}.`, { margin: [0, 4, 0, 8] })
	];
}

export function actionRows({ model }: SheetContext): Content {
	return ruledTable(
		[
			{ head: 'What to do', width: '*' },
			{ head: 'Who', width: 130 },
			{ head: 'By', width: 84, align: 'right' }
		],
		model.actions.map((action) => [
			action.title,
			action.responsible || (action.side === 'client' ? model.client.name : model.practice.shortName),
			action.dueOn === null ? 'no date' : formatCalendarDate(action.dueOn)
		]),
		{ fontSize: 9 }
	);
}

/** One page for the reader who is no engineer. */
export function plainSummarySection(context: SheetContext): Content[] {
	const { verdict, summary, actions } = context.model;
	return [
		verdictTag(verdict.verdict, { size: 11, advisory: verdict.advisory }),
		{ text: rich(verdict.plainSentence), fontSize: 15, lineHeight: 1.18, margin: [0, 9, 0, 5] },
		...paragraphs(verdict.plainExplanation, { fontSize: 10.5, color: INK_SOFT, lineHeight: 1.25 }),
		...comparison(context),
		...paragraphs(summary, { fontSize: 10, lineHeight: 1.25 }),
		...heading('What to do next'),
		...(actions.length === 0
			? [soft('No action is recommended in this report.')]
			: [
					actionRows(context),
					soft(
						'Details and cautions stand under “Findings and actions”. Work at the switchboard is for qualified persons only.'
					)
				])
	];
}
