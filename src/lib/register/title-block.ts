import type { AssessedPoint } from '../assessment/assessment';
import { formatVoltage } from '../units/format';
import { formatShortCircuitRatio } from './ratio-class';
import { reportText, type SurveyProgress, type SurveyStages } from './survey-stages';

/** What the head of a survey's pages shows. */
export interface SurveyHeadFacts {
	survey: { id: string; number: string; title: string; status: 'open' | 'closed' };
	client: { id: string; name: string };
	site: { id: string; name: string };
	point: { id: string; name: string; assessed: AssessedPoint; shortCircuitRatio: number | null };
	/** Printed label of the limit class the ratio falls in; null where the limit set has none. */
	ratioClass: string | null;
	progress: Pick<SurveyProgress, 'report'>;
	stages: SurveyStages;
}

export interface TitleBlockCell {
	label: string;
	value: string | null;
	mono?: boolean;
	href?: string;
}

/** Cells of the title block, in the order of the drawing. */
export function titleBlockCells(head: SurveyHeadFacts): TitleBlockCell[] {
	const { assessed, shortCircuitRatio } = head.point;
	const clientHref = `/clients/${head.client.id}`;
	const siteHref = `${clientHref}/sites/${head.site.id}`;
	const kind = assessed.kind === 'pcc' ? 'PCC' : 'in-plant';
	const ratio = shortCircuitRatio === null ? null : formatShortCircuitRatio(shortCircuitRatio);
	return [
		{ label: 'Client', value: head.client.name, href: clientHref },
		{ label: 'Site', value: head.site.name, href: siteHref },
		{
			label: 'Point',
			value: `${head.point.name}, ${kind}`,
			href: `${siteHref}/points/${head.point.id}`
		},
		{
			label: 'Nominal',
			value: `${formatVoltage(assessed.nominalVoltage_V)} · ${assessed.nominalFrequency_Hz} Hz`,
			mono: true
		},
		{
			label: 'I_sc/I_L',
			value: ratio === null || head.ratioClass === null ? ratio : `${ratio} (${head.ratioClass})`,
			mono: true
		},
		{ label: 'Survey', value: head.survey.number, mono: true },
		{
			label: 'Report',
			value: head.progress.report === null ? 'none yet' : reportText(head.progress.report),
			mono: true
		}
	];
}
