import type { Content, ContentSection, TDocumentDefinitions } from 'pdfmake/interfaces';
import type { ReportModel } from '../../report/report-model';
import { numberWords } from './document-words';
import { BOTTOM, INK, MARGIN, TOP } from './print-style';
import { coverSection } from './sections/cover';
import { documentControlSection } from './sections/document-control';
import { findingsSection, relianceSection } from './sections/findings';
import { sheetHead, titleBlock } from './sections/frame';
import { instrumentsSection } from './sections/instruments';
import { allValuesSection, lineageSection } from './sections/lineage';
import { methodSection } from './sections/method';
import { plainSummarySection } from './sections/plain-summary';
import { qualitySection } from './sections/quality';
import { dashboardSection, recordingsSection, tableSection } from './sections/results';
import { scopeSection } from './sections/scope';
import { sheetContext, type ReportDrawings, type SheetContext } from './sheet-context';

interface Chapter {
	title: string;
	content: Content[];
	/** Bookmark under the chapter of this number rather than of its own. */
	under?: string;
}

function chapters(context: SheetContext): Chapter[] {
	const { model } = context;
	const recordings = recordingsSection(context);
	const tables = model.tables.map((table, i): Chapter => ({
		title: `6.${i + 2} ${table.title}`,
		content: tableSection(context, table),
		under: 'results'
	}));
	return [
		{ title: '1 Document control', content: documentControlSection(context) },
		{ title: '2 Summary', content: plainSummarySection(context) },
		{ title: '3 Scope and point', content: scopeSection(context) },
		{ title: '4 Instruments, calibration and uncertainty', content: instrumentsSection(context) },
		{ title: '5 Method', content: methodSection(context) },
		{ title: '6.1 Results at a glance', content: dashboardSection(context) },
		...tables,
		...(recordings.length === 0
			? []
			: [
					{
						title: `6.${tables.length + 2} Waveform and course of time`,
						content: recordings,
						under: 'results'
					}
				]),
		{ title: '7 Data quality', content: qualitySection(context) },
		{ title: '8 Findings and actions', content: findingsSection(context) },
		{ title: '9 Reliance', content: relianceSection(context) },
		{ title: 'Appendix A: lineage', content: lineageSection(context) },
		{ title: 'Appendix B: every value', content: allValuesSection(context) }
	];
}

function chapterSection(context: SheetContext, chapter: Chapter, i: number): ContentSection {
	return {
		header: () => sheetHead(chapter.title, context.model.document.title),
		section: [
			{
				text: chapter.title,
				bold: true,
				fontSize: 15,
				margin: [0, 0, 0, 8],
				outline: true,
				outlineText: chapter.title,
				headlineLevel: 1,
				id: `chapter-${i}`
			} as Content,
			...chapter.content
		]
	};
}

/**
 * The report as a document definition, made afresh at each call: pdfmake writes into what it is given.
 * Pure but for the page count, which the foot learns while the document is laid out.
 */
export function reportDefinition(
	model: ReportModel,
	drawings: ReportDrawings
): { definition: TDocumentDefinitions; pageCount: () => number } {
	const context = sheetContext(model, drawings);
	let count = 0;
	const cover: ContentSection = {
		header: () => sheetHead(model.practice.name, 'Power quality'),
		section: coverSection(context)
	};
	const definition: TDocumentDefinitions = {
		pageSize: model.practice.paper,
		pageMargins: [MARGIN, TOP, MARGIN, BOTTOM],
		version: '1.7',
		language: 'en',
		displayTitle: true,
		compress: true,
		info: {
			title: `${model.document.title}, ${numberWords(model)} rev ${model.document.revision}`,
			author: model.practice.name,
			subject: `${model.client.name}, ${model.site.name}: ${model.point.name}`,
			creator: 'Sinewright',
			producer: 'Sinewright',
			creationDate: new Date(model.document.createdAt)
		},
		defaultStyle: { font: 'IBM Plex Sans', fontSize: 9.5, color: INK, lineHeight: 1.15 },
		footer: (page, pages) => {
			count = pages;
			return titleBlock(context, page, pages);
		},
		// A heading never stands alone at the foot of a page.
		pageBreakBefore: (node, nodes) =>
			node.headlineLevel === 2 &&
			nodes.getFollowingNodesOnPage().length === 0 &&
			nodes.getNodesOnNextPage().length > 0,
		content: [cover, ...chapters(context).map((chapter, i) => chapterSection(context, chapter, i))]
	};
	return { definition, pageCount: () => count };
}
