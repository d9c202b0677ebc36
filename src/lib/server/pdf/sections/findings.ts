import type { Content } from 'pdfmake/interfaces';
import { REMEDY_CAUTION, SITE_CAUTIONS } from '../../../report/cautions';
import { formatCalendarDate } from '../../../report/dates';
import { TONE } from '../print-style';
import type { SheetContext } from '../sheet-context';
import { bullets, heading, paragraph, paragraphs, ruledTable, soft } from '../typeset';

const PRIORITY = { urgent: 'urgent', normal: 'normal', advice: 'advice' } as const;

export function findingsSection(context: SheetContext): Content[] {
	const { model } = context;
	return [
		...heading('Findings'),
		model.findings.length === 0
			? soft('No finding beyond the results.')
			: { ol: model.findings.map((text) => ({ stack: paragraphs(text) })), margin: [0, 0, 0, 8] },
		...heading('Recommended actions'),
		model.actions.length === 0
			? soft('No action is recommended.')
			: ruledTable(
					[
						{ head: 'No.', width: 22 },
						{ head: 'Action', width: '*' },
						{ head: 'Priority', width: 46 },
						{ head: 'Who', width: 100 },
						{ head: 'By', width: 72, align: 'right' }
					],
					model.actions.map((action, i) => [
						String(i + 1),
						{
							stack: [
								{ text: action.title, bold: true, fontSize: 8.5 },
								...paragraphs(action.detail, { fontSize: 8, margin: [0, 1, 0, 0] })
							]
						},
						action.priority === 'urgent'
							? { text: PRIORITY[action.priority], color: TONE.oxide.text, bold: true, fontSize: 8 }
							: PRIORITY[action.priority],
						action.responsible || (action.side === 'client' ? model.client.name : model.practice.shortName),
						action.dueOn === null ? 'no date' : formatCalendarDate(action.dueOn)
					])
				),
		...(model.actions.length === 0 ? [] : [paragraph(REMEDY_CAUTION, { bold: true })]),
		...heading('Cautions'),
		bullets(SITE_CAUTIONS)
	];
}

export function relianceSection({ model }: SheetContext): Content[] {
	return [
		...heading('What this report states, and what it does not'),
		bullets([
			'It states what was measured at one point over one period, and compares it with the limits named. Another load, another time or another point may give another result.',
			`The evidence is ${model.verdict.evidence}; the words used for it are explained under “Method”.`,
			'Figures are traceable to the captures listed in the appendix and can be recomputed from them.',
			...(model.verdict.advisory ? ['The point lies inside the plant: the comparison is advisory.'] : [])
		]),
		...heading('Reliance'),
		...paragraphs(
			model.practice.relianceStatement.trim() === ''
				? `This report was made by ${model.practice.name} for ${model.client.name}, for the purpose stated under “Scope and point”. Others who wish to rely on it should ask the practice first.`
				: model.practice.relianceStatement
		)
	];
}
