import pdfmake from 'pdfmake';
import type { TDocumentDefinitions } from 'pdfmake/interfaces';
import { FONT_FILES, FONTS } from './fonts';

export interface RenderedPdf {
	bytes: Buffer;
	pages: number;
}

/** pdfmake keeps fonts and policies in one object of the process: documents are made one after another. */
let queue: Promise<unknown> = Promise.resolve();

/**
 * A definition as PDF bytes. The same definition gives the same bytes (its creationDate is fixed).
 * The definition is used up: pdfmake writes into it. `pageCount` must be counted by the definition's own footer.
 */
export function renderPdf(
	make: () => { definition: TDocumentDefinitions; pageCount: () => number }
): Promise<RenderedPdf> {
	const work = queue.then(async () => {
		pdfmake.setFonts(FONTS);
		// A report loads nothing from anywhere but its own faces.
		pdfmake.setUrlAccessPolicy(() => false);
		pdfmake.setLocalAccessPolicy((path) => FONT_FILES.has(path));
		const { definition, pageCount } = make();
		const bytes = await pdfmake.createPdf(definition).getBuffer();
		return { bytes: Buffer.from(bytes), pages: pageCount() };
	});
	queue = work.catch(() => undefined);
	return work;
}
