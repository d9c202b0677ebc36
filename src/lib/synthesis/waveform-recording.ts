import type { Recording, RecordingStart } from '../recording/recording';
import { synthesiseWaveform, type WaveformTruth } from './waveform';

export interface RecordingDetails {
	stationName?: string;
	recorderName?: string;
	nominalFrequency_Hz?: number | null;
	start?: RecordingStart | null;
}

/** A recording as a reader would hand it over, made from a truth instead of a file. Values are primary. */
export function synthesiseRecording(truth: WaveformTruth, details: RecordingDetails = {}): Recording {
	const samples = synthesiseWaveform(truth);
	const sampleCount = samples[0]?.length ?? 0;
	return {
		kind: 'waveform',
		format: 'COMTRADE',
		variant: 'synthesised',
		stationName: details.stationName ?? '',
		recorderName: details.recorderName ?? '',
		nominalFrequency_Hz: details.nominalFrequency_Hz ?? null,
		start: details.start ?? null,
		sampleCount,
		segments: [{ samplingRate_Hz: truth.samplingRate_Hz, fromSample: 0, toSample: sampleCount }],
		timeStamps_s: null,
		channels: truth.channels.map((channel, index) => ({
			index,
			name: channel.name,
			phaseHint: channel.phase,
			unitAsWritten: channel.quantity === 'voltage' ? 'V' : 'A',
			baseUnit: channel.quantity === 'voltage' ? 'V' : 'A',
			quantity: channel.quantity,
			samples: samples[index]!,
			valuesAre: 'primary',
			ratio: null,
			range: channel.quantisation
				? { min: -channel.quantisation.fullScale, max: channel.quantisation.fullScale }
				: null
		})),
		statusChannelNames: [],
		remarks: []
	};
}
