import { analyseWaveform, type AnalysisOptions } from '../harmonics/analyse-waveform';
import type { WaveformAnalysis } from '../harmonics/waveform-analysis';
import { sampleSignal, type ExactSignal, type Quantisation } from './exact-signal';

export interface SampledAs {
	samplingRate_Hz: number;
	duration_s: number;
	quantisation?: Quantisation;
}

/** The engine's analysis of an exact signal. Throws where the engine refuses: that would be a fault of the experiment. */
export function analyseExact(
	signal: ExactSignal,
	sampled: SampledAs,
	options: AnalysisOptions
): WaveformAnalysis {
	const { samplingRate_Hz, duration_s, quantisation } = sampled;
	const { recording, mappings } = sampleSignal(signal, samplingRate_Hz, duration_s, quantisation);
	const outcome = analyseWaveform(recording, mappings, options);
	if (!outcome.ok) throw new Error(outcome.problem.sentence);
	return outcome.value;
}
