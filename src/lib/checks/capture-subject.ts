import type { CaptureEvidence } from '../harmonics/quality/capture-evidence';
import type { QualityRemark } from '../harmonics/waveform-analysis';
import type { Phase, PhaseNames } from '../recording/phase';
import type { ReadRemark, RecordingStart } from '../recording/recording';
import type { CertificateSpan } from '../register/calibration-validity';

/** All that the checks of one analysed capture look at. */
export interface CaptureSubject {
	captureId: string;
	name: string;
	kind: 'waveform' | 'trend';
	/** null for analyses made before evidence was kept. */
	evidence: CaptureEvidence | null;
	/** Of the analysis. */
	remarks: readonly QualityRemark[];
	/** Of the reader. */
	readerRemarks: readonly ReadRemark[];
	nominalFrequency_Hz: 50 | 60;
	/** Start as the file writes it; null where it tells none. */
	statedStart: RecordingStart | null;
	start_ms: number;
	duration_s: number;
	uploaded_ms: number;
	/** Certificates of the instrument that recorded it; null where no instrument is named. */
	instrument: { name: string; certificates: readonly CertificateSpan[] } | null;
}

/** The point and its limits, as the checks of all its captures see them. */
export interface CheckedPoint {
	nominalVoltages_V: Partial<Record<Phase, number>>;
	demandCurrent_A: number | null;
	phaseNames: PhaseNames;
	timeZone: string;
	/** Limits by order, percent of a base; null where none applies. */
	limits: Record<'voltage' | 'current', OrderLimits | null>;
}

export interface OrderLimits {
	/** Index = order. */
	limits_pct: readonly (number | null)[];
	/** "of demand current". */
	words: string;
	/** 100 % in V or A on a phase; null for "the fundamental that is there". */
	base: (phase: Phase) => number | null;
}
