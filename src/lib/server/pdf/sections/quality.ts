import type { Content } from 'pdfmake/interfaces';
import { formatMoment } from '../../../report/dates';
import { formatDuration, formatNumber } from '../../../units/format';
import type { SheetContext } from '../sheet-context';
import { heading, paragraph, ruledTable, soft } from '../typeset';

const SEVERITY = { blocks: 'blocks a verdict', warns: 'warning', notes: 'note' } as const;
const INTERVAL: Record<string, string> = {
	window: '10/12 cycles',
	'3s': '3 s',
	'10min': '10 min',
	'2h': '2 h'
};

export function qualitySection(context: SheetContext): Content[] {
	const { quality, site } = context.model;
	return [
		...heading('What was found about the captures'),
		quality.remarks.length === 0
			? soft(
					'The checks for clipping, dead channels, reversed or swapped sensors, wrong nominal frequency and too low a sampling rate found nothing.'
				)
			: ruledTable(
					[
						{ head: 'Capture', width: 110 },
						{ head: 'Weight', width: 80 },
						{ head: 'Finding', width: '*' }
					],
					quality.remarks.map((r) => [r.capture, SEVERITY[r.severity], r.sentence])
				),
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
