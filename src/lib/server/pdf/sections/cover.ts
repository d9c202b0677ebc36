import type { Content } from 'pdfmake/interfaces';
import { VERDICT_WORDS } from '../../../assessment/verdict-words';
import { ADVISORY_STATEMENT } from '../../../report/cautions';
import { dayInPractice, isDraft, measuredWords, pointKindWords } from '../document-words';
import { contentWidth, INK_SOFT, TONE } from '../print-style';
import type { SheetContext } from '../sheet-context';
import { rich, ruledTable, soft, verdictTag } from '../typeset';

function verdictBlock({ model }: SheetContext): Content {
	const { verdict } = model;
	const tone = TONE[VERDICT_WORDS[verdict.verdict].tone];
	return {
		margin: [0, 22, 0, 18],
		table: {
			widths: ['*'],
			body: [
				[
					{
						stack: [
							verdictTag(verdict.verdict, { size: 10.5, advisory: verdict.advisory }),
							{ text: rich(verdict.sentence), fontSize: 14.5, lineHeight: 1.18, margin: [0, 8, 0, 6] },
							soft(`Evidence: ${verdict.evidenceText}`, { margin: [0, 0, 0, 0] }),
							...(verdict.advisory ? [soft(ADVISORY_STATEMENT, { margin: [0, 4, 0, 0] })] : [])
						]
					}
				]
			]
		},
		layout: {
			hLineWidth: () => 0,
			vLineWidth: (i) => (i === 0 ? 4 : 0),
			vLineColor: () => tone.text,
			paddingLeft: () => 14,
			paddingRight: () => 0,
			paddingTop: () => 0,
			paddingBottom: () => 1
		}
	};
}

function revisionTable({ model }: SheetContext): Content {
	return ruledTable(
		[
			{ head: 'Rev.', width: 30 },
			{ head: 'Date', width: 100 },
			{ head: 'Reason', width: '*' },
			{ head: 'Prepared', width: 110 },
			{ head: 'Checked and issued', width: 120 }
		],
		model.document.revisions.map((entry) => [
			entry.revision,
			entry.issuedAt === null ? 'not issued' : dayInPractice(model, entry.issuedAt),
			entry.reason,
			entry.preparedBy,
			entry.issuedAt === null ? '–' : (entry.checkedBy ?? '–')
		])
	);
}

export function coverSection(context: SheetContext): Content[] {
	const { model, drawings } = context;
	const spectrum = drawings.spectra[0];
	const chart = model.spectra[0];
	return [
		{
			text: `${model.client.name}, ${model.site.name}. ${model.point.name}, ${pointKindWords(model)}`,
			color: INK_SOFT,
			fontSize: 10,
			margin: [0, 40, 0, 4]
		},
		{ text: model.document.title, bold: true, fontSize: 25, lineHeight: 1.05, headlineLevel: 1 },
		...(isDraft(model)
			? [
					{
						text: 'DRAFT. Not checked, not issued: not to be relied upon.',
						bold: true,
						color: TONE.oxide.text,
						fontSize: 10.5,
						margin: [0, 10, 0, 0] as [number, number, number, number]
					}
				]
			: []),
		verdictBlock(context),
		...(spectrum && chart
			? [
					{
						text: rich(chart.title),
						bold: true,
						fontSize: 9,
						margin: [0, 0, 0, 2] as [number, number, number, number]
					},
					{ svg: spectrum, width: contentWidth(model.practice.paper), margin: [0, 0, 0, 14] } as Content
				]
			: []),
		revisionTable(context),
		soft(`Measured ${measuredWords(model)}. Survey ${model.survey.number}: ${model.survey.title}.`)
	];
}
