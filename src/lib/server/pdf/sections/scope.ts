import type { Content } from 'pdfmake/interfaces';
import { SYSTEM_WORDS } from '../../../register/point-facts';
import { ADVISORY_STATEMENT } from '../../../report/cautions';
import { formatCurrent, formatNumber, formatVoltage } from '../../../units/format';
import { measuredWords, pointKindWords } from '../document-words';
import { contentWidth } from '../print-style';
import type { SheetContext } from '../sheet-context';
import { singleLineSvg } from '../single-line-drawing';
import { bullets, facts, heading, paragraph, soft } from '../typeset';

function ratioWords({ model }: SheetContext): string {
	const { ctRatio, vtRatio } = model.point;
	const parts = [
		ctRatio
			? `CT ${ctRatio.primary_A} A : ${ctRatio.secondary_A} A`
			: 'no current transformer ratio applied at the point',
		vtRatio
			? `VT ${vtRatio.primary_V} V : ${vtRatio.secondary_V} V`
			: 'no voltage transformer ratio applied at the point'
	];
	return parts.join('; ');
}

function working(title: string, lines: readonly string[], absent: string): Content[] {
	return [...heading(title), lines.length === 0 ? soft(absent) : bullets(lines, lines.length > 5 ? 7.5 : 9)];
}

export function scopeSection(context: SheetContext): Content[] {
	const { model } = context;
	const { point, site, client } = model;
	const names = point.phaseNames;
	return [
		paragraph(
			`This report compares the harmonic distortion measured at ${point.name}, ${site.name}, with ${model.verdict.limitSetTitle}. It covers the orders, phases and statistical rules listed under “Results”, for the time measured, and nothing else.`
		),
		facts([
			['Client', client.name],
			['Site', [site.name, site.address].filter(Boolean).join(', ')],
			['Supply network', site.utility || 'not given'],
			['Point', `${point.name}, ${pointKindWords(model)}`],
			[
				'System',
				`${formatVoltage(point.nominalVoltage_V)}, ${point.nominalFrequency_Hz} Hz, ${SYSTEM_WORDS[point.system].word.toLowerCase()}`
			],
			['Phases', `${names.L1}, ${names.L2}, ${names.L3}; neutral ${names.N}`],
			[
				'Demand current I_L',
				point.demandCurrent_A === null
					? 'not known: current is not assessed'
					: formatCurrent(point.demandCurrent_A)
			],
			[
				'Short-circuit current I_sc',
				point.shortCircuitCurrent_A === null
					? 'not known'
					: `${formatCurrent(point.shortCircuitCurrent_A)}, ${point.shortCircuitOrigin}`
			],
			[
				'Ratio I_sc/I_L',
				point.shortCircuitRatio === null
					? 'not known'
					: formatNumber(point.shortCircuitRatio, { decimals: 1 })
			],
			['Transformer ratios', ratioWords(context)],
			['Limit set', `${model.verdict.limitSetTitle}. ${point.limitSetReason}`.trim()],
			['Measured', measuredWords(model)]
		]),
		...(model.verdict.advisory ? [paragraph(ADVISORY_STATEMENT, { bold: true })] : []),
		...heading('Where it was measured'),
		{
			svg: singleLineSvg(point, site.utility, contentWidth(model.practice.paper)),
			width: contentWidth(model.practice.paper),
			margin: [0, 0, 0, 6]
		},
		...working('How the demand current was obtained', point.demandWorking, 'Not known.'),
		...working('How the short-circuit current was obtained', point.shortCircuitWorking, 'Not known.')
	];
}
