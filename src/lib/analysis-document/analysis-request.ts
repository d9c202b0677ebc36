import type { IntervalSeries } from '../harmonics/intervals';
import type { PointSystem } from '../harmonics/nominal-voltages';
import type { SuggestionPoint } from '../recording/channel-suggestion';
import { DEFAULT_PHASE_NAMES } from '../recording/phase';
import type { OpenedCapture } from '../recording/read-capture';
import type { RecordingStart } from '../recording/recording';
import { likelySystem } from './channel-choice';
import type { AssessmentEntry } from './document-schema';
import type { PointFile } from './point-file';

/** Facts that a point file may leave open and the measurement tells. */
export interface MeasuredPointFacts {
	system: PointSystem;
	nominalFrequency_Hz: 50 | 60;
	timeZone: string;
}

/** A point, and the judgement to be passed on what is measured there. */
export interface JudgedPoint {
	facts: PointFile;
	/** As assessmentEntry does; handed in, because whoever asks for no assessment need not load what it takes. */
	judge: (measured: MeasuredPointFacts, series: IntervalSeries[]) => AssessmentEntry;
}

/** All that an analysis document is made from. */
export interface AnalysisRequest {
	content: OpenedCapture;
	files: { name: string; sha256: string }[];
	/** Stated by the person; null to take it from the point or the measurement. */
	nominalFrequency_Hz: 50 | 60 | null;
	/** For starts without a zone of their own. */
	timeZone: string;
	/** Start as the person states it; null to take the file's. */
	start: RecordingStart | null;
	/** Null: no assessment. */
	judged: JudgedPoint | null;
}

export function systemOf({ content, judged }: AnalysisRequest): PointSystem {
	return judged?.facts.system ?? likelySystem(content);
}

/** The facts that the mapping of channels leans on. */
export function suggestionPointOf(request: AnalysisRequest): SuggestionPoint {
	const facts = request.judged?.facts;
	return {
		system: systemOf(request),
		phaseNames: facts?.phaseNames ?? DEFAULT_PHASE_NAMES,
		voltageTransformer: facts?.voltageTransformer ?? null,
		currentTransformer: facts?.currentTransformer ?? null
	};
}
