import type { CaptureFile } from '../../src/lib/recording/recording';
import { writeComtrade } from '../../src/lib/synthesis/comtrade-writer';
import { writePqdifTrend } from '../../src/lib/synthesis/pqdif-writer';
import { writeDelimitedTrend, writeDelimitedWaveform } from '../../src/lib/synthesis/delimited-text-writer';
import type { WaveformTruth } from '../../src/lib/synthesis/waveform';
import { threePhaseChannels, type ThreePhaseTruth } from '../../src/lib/synthesis/waveform-three-phase';
import { synthesiseRecording } from '../../src/lib/synthesis/waveform-recording';
import * as spectra from './spectra';
import { weekTrend } from './week-trend';

/** Local clock time "2026-03-03T10:15:00" with its offset: what a recorder set to site time writes. */
export interface LocalStart {
	local: string;
	utcOffset_min: number;
}

function waveform(
	truth: ThreePhaseTruth,
	details: {
		station: string;
		frequency_Hz: number;
		nominal_Hz: 50 | 60;
		rate_Hz: number;
		duration_s: number;
		seed: number;
	},
	start: LocalStart
) {
	const whole: WaveformTruth = {
		frequency_Hz: details.frequency_Hz,
		samplingRate_Hz: details.rate_Hz,
		duration_s: details.duration_s,
		seed: details.seed,
		channels: threePhaseChannels(truth)
	};
	const recording = synthesiseRecording(whole, {
		stationName: details.station,
		recorderName: 'PQ-2',
		nominalFrequency_Hz: details.nominal_Hz,
		start
	});
	return { ...recording, start };
}

/** The same recording as a three-wire point has it: voltages between the lines instead of to neutral. */
function betweenLines(recording: ReturnType<typeof waveform>): ReturnType<typeof waveform> {
	const pairs = { L1: ['L1L2', 1], L2: ['L2L3', 2], L3: ['L3L1', 0] } as const;
	const channels = recording.channels.map((channel) => {
		if (channel.quantity !== 'voltage') return channel;
		const [phaseHint, other] = pairs[channel.phaseHint as 'L1' | 'L2' | 'L3'];
		const against = recording.channels[other]!.samples;
		return {
			...channel,
			name: `U${phaseHint.replaceAll('L', '')}`,
			phaseHint,
			samples: channel.samples.map((value, n) => value - against[n]!)
		};
	});
	return { ...recording, channels };
}

/** Office hours in full, nights at a third, weekends quieter. */
const workingWeek = (hour: number, day: number): number => {
	const weekend = day % 7 >= 5 ? 0.75 : 1;
	const daily = 0.62 + 0.38 * Math.exp(-(((hour - 14) / 4.5) ** 2));
	return weekend * daily;
};
/** Compressors follow the heat of the day and never stop. */
const coldStore = (hour: number): number => 0.78 + 0.22 * Math.exp(-(((hour - 15) / 5) ** 2));

export function bellwetherWeek(start: LocalStart): CaptureFile[] {
	return [
		writePqdifTrend(
			weekTrend({
				startLocal: start.local,
				utcOffset_min: start.utcOffset_min,
				days: 7,
				voltage_V: 277.6,
				current_A: 1090,
				voltageHarmonics: spectra.COMPRESSOR_VOLTAGE,
				currentHarmonics: spectra.COMPRESSOR_CURRENT,
				currentFactors: [0.98, 0.95, 1.02],
				load: coldStore,
				flaggedAt: [203, 204, 511, 770, 771, 905],
				nominalFrequency_Hz: 60,
				withNeutral: true,
				seed: 142
			}),
			{ stem: 'HarrowDock4_week_10min', compression: 'records', nominalFrequency_Hz: 60 }
		)
	];
}

export function bellwetherWaveform(start: LocalStart): CaptureFile[] {
	return writeComtrade(
		waveform(
			{
				voltage_V: 277.4,
				voltageHarmonics: spectra.COMPRESSOR_VOLTAGE,
				current_A: 1105,
				currentHarmonics: spectra.COMPRESSOR_CURRENT,
				lag_deg: 18,
				voltageFactors: [1, 0.997, 1.002],
				currentFactors: [0.98, 0.95, 1.02],
				withNeutral: true,
				noise_pctOfFundamental: 0.02
			},
			{
				station: 'Harrow Dock 4 main switchboard',
				frequency_Hz: 60.012,
				nominal_Hz: 60,
				rate_Hz: 15360,
				duration_s: 10,
				seed: 41
			},
			start
		),
		{ revision: '2013', dataFormat: 'BINARY', stem: 'HarrowDock4_peak' }
	);
}

export function drivePanelWaveform(start: LocalStart): CaptureFile[] {
	return writeComtrade(
		waveform(
			{
				voltage_V: 276.9,
				voltageHarmonics: spectra.COMPRESSOR_VOLTAGE,
				current_A: 310,
				currentHarmonics: spectra.DRIVE_PANEL_CURRENT,
				lag_deg: 12,
				noise_pctOfFundamental: 0.03
			},
			{
				station: 'Compressor panel 2',
				frequency_Hz: 59.991,
				nominal_Hz: 60,
				rate_Hz: 15360,
				duration_s: 6,
				seed: 77
			},
			start
		),
		{ revision: '1999', dataFormat: 'ASCII', stem: 'Panel2' }
	);
}

export function dataHallWeek(start: LocalStart): CaptureFile[] {
	return [
		writeDelimitedTrend(
			weekTrend({
				startLocal: start.local,
				utcOffset_min: start.utcOffset_min,
				days: 7,
				voltage_V: 231.2,
				current_A: 640,
				voltageHarmonics: spectra.DATA_HALL_VOLTAGE,
				currentHarmonics: spectra.DATA_HALL_CURRENT,
				currentFactors: [1, 0.97, 1.03],
				load: workingWeek,
				flaggedAt: [388, 389],
				nominalFrequency_Hz: 50,
				withNeutral: true,
				seed: 9
			}),
			{ stem: 'KestrelRow_LV1_week', separator: ';', decimal: ',', digits: 5 }
		)
	];
}

export function pressWaveform(start: LocalStart, before: boolean): CaptureFile[] {
	return writeComtrade(
		waveform(
			{
				voltage_V: 7975,
				voltageHarmonics: spectra.PRESS_VOLTAGE,
				current_A: before ? 92 : 88,
				currentHarmonics: before ? spectra.PRESS_CURRENT_BEFORE : spectra.PRESS_CURRENT,
				lag_deg: 21,
				noise_pctOfFundamental: 0.015
			},
			{
				station: 'Ostler Lane 13.8 kV',
				frequency_Hz: 60.004,
				nominal_Hz: 60,
				rate_Hz: 12800,
				duration_s: 12,
				seed: before ? 5 : 6
			},
			start
		),
		{ revision: '1999', dataFormat: 'BINARY', stem: before ? 'OstlerLane_before' : 'OstlerLane_after' }
	);
}

export function hospitalWaveform(start: LocalStart): CaptureFile[] {
	const lineVoltage_V = 11_060;
	const recording = betweenLines(
		waveform(
			{
				voltage_V: lineVoltage_V / Math.sqrt(3),
				voltageHarmonics: spectra.HOSPITAL_VOLTAGE,
				current_A: 118,
				currentHarmonics: spectra.HOSPITAL_CURRENT,
				lag_deg: 9,
				noise_pctOfFundamental: 0.01
			},
			{
				station: 'Fennimore intake 11 kV',
				frequency_Hz: 49.987,
				nominal_Hz: 50,
				rate_Hz: 12800,
				duration_s: 10,
				seed: 11
			},
			start
		)
	);
	return [writeDelimitedWaveform(recording, { stem: 'Fennimore_intake', time: 'stamps' })];
}
