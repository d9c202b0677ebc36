import { getDocument } from 'pdfjs-dist/legacy/build/pdf.mjs';

export interface ReadPdf {
	pages: string[];
	title: string;
	language: string | null;
	outline: string[];
}

/** Text, title, language and bookmarks as a reader other than our own writer finds them. */
export async function readPdf(bytes: Uint8Array): Promise<ReadPdf> {
	const document = await getDocument({ data: new Uint8Array(bytes), useSystemFonts: false, verbosity: 0 })
		.promise;
	const pages: string[] = [];
	for (let number = 1; number <= document.numPages; number++) {
		const content = await (await document.getPage(number)).getTextContent();
		pages.push(
			content.items
				.map((item) => ('str' in item ? item.str : ''))
				.join(' ')
				.replace(/\s+/g, ' ')
		);
	}
	const { info } = await document.getMetadata();
	const outline = await document.getOutline();
	const read = {
		pages,
		title: String((info as Record<string, unknown>)['Title'] ?? ''),
		language: String((info as Record<string, unknown>)['Language'] ?? '') || null,
		outline: (outline ?? []).map((item) => item.title)
	};
	await document.destroy();
	return read;
}
