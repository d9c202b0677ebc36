import type { Content } from 'pdfmake/interfaces';
import { dayInPractice, numberWords, statusWords } from '../document-words';
import type { SheetContext } from '../sheet-context';
import { facts, heading, paragraph, ruledTable, soft } from '../typeset';

const STATUS: Record<string, string> = { 'in-check': 'in check' };

function checkStatement({ model }: SheetContext): string {
	const { document } = model;
	if (document.issuedAt === null)
		return 'This document has not been issued. Nobody but its authors should rely on it.';
	if (document.selfChecked)
		return `This report was prepared, checked and issued by one person, ${document.preparedBy}. The practice allows this; no second engineer has checked it.`;
	return `${document.checkedBy ?? ''} checked this report and issued it; ${document.preparedBy} prepared it. Nobody checked their own work.`;
}

export function documentControlSection(context: SheetContext): Content[] {
	const { model } = context;
	const { document, practice } = model;
	return [
		facts([
			['Document number', numberWords(model)],
			['Revision and status', `${document.revision}, ${statusWords(model)}`],
			['Prepared by', `${document.preparedBy}, ${dayInPractice(model, document.preparedAt)}`],
			[
				'Checked and issued by',
				document.issuedAt === null
					? 'not yet'
					: `${document.checkedBy ?? ''}, ${dayInPractice(model, document.issuedAt)}`
			],
			[
				'Practice',
				[practice.name, practice.address, practice.email, practice.phone].filter(Boolean).join(', ')
			]
		]),
		paragraph(checkStatement(context), document.selfChecked ? { bold: true } : {}),
		...heading('Revisions'),
		ruledTable(
			[
				{ head: 'Rev.', width: 30 },
				{ head: 'Issued', width: 92 },
				{ head: 'Status', width: 70 },
				{ head: 'Reason', width: '*' },
				{ head: 'Prepared', width: 92 },
				{ head: 'Checked', width: 92 }
			],
			document.revisions.map((entry) => [
				entry.revision,
				dayInPractice(model, entry.issuedAt),
				STATUS[entry.status] ?? entry.status,
				entry.reason,
				entry.preparedBy,
				entry.checkedBy ?? '–'
			])
		),
		soft(
			'An issued revision is never changed. A correction is a new revision, which supersedes this one and says why. The data hash in the title block stands for the captures, the limits and the figures; two documents with the same hash rest on the same data.'
		)
	];
}
