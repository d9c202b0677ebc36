import type { ReportModel } from '../../report/report-model';
import { formatPhase, type Phase } from '../../recording/phase';

/** Charts of one report as SVG text, ready to be set; made apart so that the sections stay pure. */
export interface ReportDrawings {
	/** By position in ReportModel.spectra. */
	spectra: string[];
	/** One drawing for each quantity shown. */
	waveform: string[];
	/** By position in ReportModel.trends. */
	trends: string[];
}

export interface SheetContext {
	model: ReportModel;
	drawings: ReportDrawings;
	phase: (phase: Phase) => string;
}

export function sheetContext(model: ReportModel, drawings: ReportDrawings): SheetContext {
	return { model, drawings, phase: (phase) => formatPhase(phase, model.point.phaseNames) };
}
