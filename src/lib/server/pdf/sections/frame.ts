import type { Content } from 'pdfmake/interfaces';
import { numberWords, shortHash, statusWords } from '../document-words';
import { INK, INK_SOFT, MARGIN, RULE, TONE } from '../print-style';
import type { SheetContext } from '../sheet-context';
import { figures } from '../typeset';

/** Head of a sheet: section on the left, document on the right, ruled. */
export function sheetHead(left: string, right: string): Content {
	return {
		margin: [MARGIN, 34, MARGIN, 0],
		table: {
			widths: ['*', 'auto'],
			body: [
				[
					{ text: left, bold: true, fontSize: 9.5 },
					{ text: right, color: INK_SOFT, fontSize: 8.5, alignment: 'right', margin: [0, 1, 0, 0] }
				]
			]
		},
		layout: {
			hLineWidth: (i) => (i === 1 ? 0.9 : 0),
			vLineWidth: () => 0,
			hLineColor: () => INK,
			paddingLeft: () => 0,
			paddingRight: () => 0,
			paddingTop: () => 0,
			paddingBottom: () => 8
		}
	};
}

function cell(label: string, value: string, mono = false, attention = false): Content {
	return {
		stack: [
			{ text: label, fontSize: 5.8, color: INK_SOFT },
			{
				text: mono ? figures(value) : value,
				fontSize: mono ? 7 : 7.3,
				margin: [0, 1, 0, 0],
				...(attention ? { color: TONE.oxide.text, bold: true } : {})
			}
		]
	};
}

/** Title block at the foot of every sheet, as on a drawing. */
export function titleBlock(context: SheetContext, page: number, pages: number): Content {
	const { model } = context;
	const draft = model.document.issuedAt === null;
	return {
		margin: [MARGIN, 14, MARGIN, 0],
		table: {
			widths: ['*', 88, 82, 28, 54, 112],
			heights: 24,
			body: [
				[
					cell('Client · site', `${model.client.name} · ${model.site.name}`),
					cell('Document', numberWords(model), model.document.number !== null),
					cell('Status', statusWords(model), false, draft),
					cell('Rev.', model.document.revision, true),
					cell('Page', `${page} of ${pages}`),
					cell('Data hash (SHA-256)', shortHash(model.lineage.dataSha256), true)
				]
			]
		},
		layout: {
			hLineWidth: () => 0.8,
			vLineWidth: (i, node) => (i === 0 || i === (node.table.widths?.length ?? 0) ? 0.8 : 0.4),
			hLineColor: () => INK,
			vLineColor: (i, node) => (i === 0 || i === (node.table.widths?.length ?? 0) ? INK : RULE),
			paddingLeft: () => 5,
			paddingRight: () => 4,
			paddingTop: () => 3,
			paddingBottom: () => 3
		}
	};
}
