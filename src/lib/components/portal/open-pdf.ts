import type { PDFDocumentProxy } from 'pdfjs-dist';

export interface OpenPdf {
	pageCount: number;
	/** Draws page `page` (from 1) into `canvas` at `width_px` CSS pixels; text goes into `text` when given. */
	draw(page: number, canvas: HTMLCanvasElement, width_px: number, text: HTMLElement | null): Promise<void>;
	close(): void;
}

/** Opens a PDF in the browser; the drawing library is only fetched by pages that show one. */
export async function openPdf(src: string): Promise<OpenPdf> {
	const [pdfjs, worker] = await Promise.all([
		import('pdfjs-dist'),
		import('pdfjs-dist/build/pdf.worker.min.mjs?url')
	]);
	pdfjs.GlobalWorkerOptions.workerSrc = worker.default;
	const task = pdfjs.getDocument({ url: src, isEvalSupported: false });
	const pdf: PDFDocumentProxy = await task.promise;
	return {
		pageCount: pdf.numPages,
		async draw(number, canvas, width_px, text) {
			const page = await pdf.getPage(number);
			const scale = width_px / page.getViewport({ scale: 1 }).width;
			const density = Math.min(window.devicePixelRatio || 1, 2);
			const viewport = page.getViewport({ scale: scale * density });
			canvas.width = Math.floor(viewport.width);
			canvas.height = Math.floor(viewport.height);
			await page.render({ canvas, viewport }).promise;
			if (!text) return;
			text.replaceChildren();
			text.style.setProperty('--total-scale-factor', String(scale));
			await new pdfjs.TextLayer({
				textContentSource: page.streamTextContent(),
				container: text,
				viewport: page.getViewport({ scale })
			}).render();
			// The library measures text on a canvas that it leaves in the page; nobody is meant to find it.
			for (const left of document.querySelectorAll('.hiddenCanvasElement'))
				left.setAttribute('aria-hidden', 'true');
		},
		close: () => void task.destroy()
	};
}
