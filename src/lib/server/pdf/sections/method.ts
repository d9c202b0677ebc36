import type { Content } from 'pdfmake/interfaces';
import { decisionRuleWords } from '../../../report/rule-words';
import type { SheetContext } from '../sheet-context';
import { bullets, heading, paragraph, ruledTable, soft } from '../typeset';

function windowWords(frequency_Hz: 50 | 60): string {
	return frequency_Hz === 50 ? '10 cycles' : '12 cycles';
}

export function methodSection(context: SheetContext): Content[] {
	const { model } = context;
	const { method, point } = model;
	return [
		paragraph(
			`Harmonics are taken from windows of ${windowWords(point.nominalFrequency_Hz)} of the measured fundamental, about 200 ms, joined without gap or overlap (IEC 61000-4-7). Each order is the harmonic subgroup: the line of the order and its two neighbours, combined as root of the sum of squares. Fifteen windows make a 3-second value; ten minutes of the clock make a 10-minute value (IEC 61000-4-30).`
		),
		paragraph(
			'Intervals during a dip, a swell or an interruption are flagged. They are left out where the rule says so, counted, and listed under “Data quality”.'
		),
		paragraph(decisionRuleWords(method.decisionRule)),
		paragraph(
			'Comparison is on unrounded values; figures are rounded for print only, and never so that a value and its limit look equal when they are not.'
		),
		...heading('Tables applied', `${method.limitSetTitle}`),
		ruledTable(
			[
				{ head: 'Table', width: 130 },
				{ head: 'Clause', width: 60 },
				{ head: 'Percent of', width: 130 },
				{ head: 'Why this table and row', width: '*' }
			],
			method.tables.map((t) => [t.title, t.clause, t.basisText, t.selection])
		),
		...heading('Statistical rules'),
		method.statistics.length === 0
			? soft('The limit set states no statistical rule.')
			: ruledTable(
					[
						{ head: 'Quantity', width: 60 },
						{ head: 'Rule', width: '*' },
						{ head: 'Times the limit', width: 80, align: 'right', mono: true },
						{ head: 'Clause', width: 70 }
					],
					method.statistics.map((s) => [s.quantity, s.text, `× ${s.multiplier}`, s.clause])
				),
		...heading('How far the evidence reaches'),
		paragraph(`Evidence: ${model.verdict.evidenceText}`),
		bullets([
			'weekly: everything the rule asks for was measured;',
			'partial: part of the period was measured, and its share is stated with each figure;',
			'snapshot: the capture is too short for any percentile, and its comparison with the limits is indicative only.'
		])
	];
}
