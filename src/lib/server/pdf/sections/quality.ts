import type { Content } from 'pdfmake/interfaces';
import { OUTCOME_WORDS } from '../../../checks/capture-check';
import { formatDay, formatMoment } from '../../../report/dates';
import { formatDuration, formatNumber } from '../../../units/format';
import type { SheetContext } from '../sheet-context';
import { heading, paragraph, ruledTable, soft } from '../typeset';

const INTERVAL: Record<string, string> = {
	window: '10/12 cycles',
	'3s': '3 s',
	'10min': '10 min',
	'2h': '2 h'
};

/** What was found, each with what an engineer said against it; then what was checked and is in order, by capture. */
function checkList({ quality, site }: SheetContext['model']): Content[] {
	const passes = quality.checks.filter(({ outcome }) => outcome === 'passes');
	const findings = quality.checks.filter(({ outcome }) => outcome !== 'passes');
	const where = (capture: string | null) => capture ?? 'all captures';
	const passedAt = [...new Set(passes.map(({ capture }) => capture))];
	const inOrder = passedAt.map((capture) => [
		where(capture),
		[...new Set(passes.filter((one) => one.capture === capture).map(({ title }) => title))].join(', ')
	]);
	return [
		findings.length === 0
			? soft('The checks of the captures found nothing to remark on.')
			: ruledTable(
					[
						{ head: 'Capture', width: 92 },
						{ head: 'Check and weight', width: 108 },
						{ head: 'Finding', width: '*' }
					],
					findings.map(({ capture, title, outcome, sentence, overrule }) => [
						where(capture),
						`${title}: ${OUTCOME_WORDS[outcome]}${overrule ? ', overruled' : ''}`,
						overrule
							? `${sentence}\nOverruled by ${overrule.by}, ${formatDay(overrule.at, site.timeZone)}: ${overrule.reason}`
							: sentence
					])
				),
		...(inOrder.length === 0
			? []
			: [
					...heading('Checked and in order'),
					ruledTable(
						[
							{ head: 'Capture', width: 92 },
							{ head: 'Checks', width: '*' }
						],
						inOrder
					)
				])
	];
}

export function qualitySection(context: SheetContext): Content[] {
	const { quality, site } = context.model;
	return [
		...heading('What was found about the captures'),
		...checkList(context.model),
		...heading('Flagged intervals'),
		paragraph(
			quality.flaggedTotal === 0
				? `None of the ${formatNumber(quality.intervalTotal, { decimals: 0 })} intervals is flagged.`
				: `${formatNumber(quality.flaggedTotal, { decimals: 0 })} of ${formatNumber(quality.intervalTotal, { decimals: 0 })} intervals are flagged because a dip, a swell or an interruption lies in them.`
		),
		...(quality.flagged.length === 0
			? []
			: [
					ruledTable(
						[
							{ head: 'Start, time of the site', width: '*' },
							{ head: 'Interval', width: 80 },
							{ head: 'Length', width: 70, align: 'right' },
							{ head: 'Quantity', width: 80 }
						],
						quality.flagged.map((f) => [
							formatMoment(f.startsAt, site.timeZone),
							INTERVAL[f.interval] ?? f.interval,
							formatDuration(f.length_s),
							f.quantity
						])
					)
				]),
		...(quality.flaggedTotal > quality.flagged.length
			? [soft(`The first ${quality.flagged.length} are listed; all are kept with the captures.`)]
			: [])
	];
}
