import type { ReportModel } from '../../../report/report-model';
import { drawReport } from '../../pdf/report-drawings';
import { reportDefinition } from '../../pdf/report-definition';
import { renderPdf, type RenderedPdf } from '../../pdf/render';

/** Charts, then sheets; `progress` is told how many of about how many steps are done. */
export async function makePdf(
	model: ReportModel,
	progress: (done: number, total: number, text: string) => Promise<void>
): Promise<RenderedPdf> {
	const charts = model.spectra.length + model.trends.length + (model.waveform === null ? 0 : 1);
	const total = charts + 3;
	await progress(1, total, 'drawing the charts');
	const drawings = await drawReport(model, (count) =>
		progress(1 + count, total, `${count} of ${charts} charts drawn`)
	);
	await progress(charts + 1, total, 'setting the pages');
	const pdf = await renderPdf(() => reportDefinition(model, drawings));
	await progress(charts + 2, total, `${pdf.pages} pages made`);
	return pdf;
}
