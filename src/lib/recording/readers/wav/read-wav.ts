import { ok, type Result } from '../../../result';
import type { CaptureHandle } from '../../capture-handle';
import type { ReadProblem, ReadRemark, RecordingNote } from '../../recording';
import { rowsInFile, type CaptureSource, type SourceChannel } from '../../sample-source';
import { counted, note, quoted, refuse, warning } from '../read-problem';
import { riffChunks, riffForm, type RiffChunk, type RiffForm } from './riff-chunks';
import { readWaveFormat, type WaveFormat } from './wave-format';
import { readBroadcastExtension, readInfo } from './wave-texts';

/** The unit of samples that nobody has calibrated: parts of full scale. */
export const FULL_SCALE_UNIT = 'of full scale';

/**
 * Opens a recording in a WAV file: RIFF, RF64 or BW64; PCM of 8, 16, 24 or 32 bits or floating point of 32 or 64. Samples stay
 * in the file, as parts of full scale: what full scale means in volts or amperes is not in the file and has to be stated.
 * returns  null where the file is no RIFF file at all
 */
export function openWav(file: CaptureHandle): Result<CaptureSource, ReadProblem> | null {
	const riff = riffForm(file);
	if (riff === null) return null;
	if (riff.form === 'RIFX' || riff.of !== 'WAVE')
		return refuse(
			'wav-not-wave',
			file.name,
			'byte 0',
			`${file.name} begins (byte 0) as ${riff.form} and holds ${riff.form === 'RIFX' ? 'numbers of the other byte order' : `${quoted(riff.of)}, not sound`}; a WAV file (RIFF … WAVE) was expected. Export the recording again as WAV.`
		);
	const chunks = riffChunks(file);
	const format = chunks.find(({ id }) => id === 'fmt ');
	const data = chunks.find(({ id }) => id === 'data');
	if (format === undefined || data === undefined)
		return missingChunk(file, format === undefined ? 'fmt ' : 'data', chunks);
	const wave = readWaveFormat(file, format);
	if (!wave.ok) return wave;
	return openSamples(file, riff.form, wave.value, data, chunks);
}

function missingChunk(file: CaptureHandle, id: string, chunks: RiffChunk[]) {
	const last = chunks.at(-1)?.end ?? 12;
	return refuse(
		'wav-chunk-missing',
		file.name,
		`byte ${last}`,
		`${file.name} ends at byte ${file.size_bytes}, but a “${id.trim()}” chunk (${id === 'data' ? 'the samples' : 'the description of the samples'}) was expected from byte ${last} on; the file is damaged or was not written to its end. Record or export it again.`
	);
}

function openSamples(
	file: CaptureHandle,
	form: RiffForm,
	wave: WaveFormat,
	data: RiffChunk,
	chunks: RiffChunk[]
): Result<CaptureSource, ReadProblem> {
	const { rowBytes, samplingRate_Hz } = wave;
	const present = data.end - data.start;
	const sampleCount = Math.floor(present / rowBytes);
	if (sampleCount === 0)
		return refuse(
			'wav-empty',
			file.name,
			`byte ${data.start}`,
			`${file.name} holds ${counted(present, 'byte')} of samples from byte ${data.start} on; at least ${rowBytes} were expected (one ${wave.words} sample of ${counted(wave.channelCount, 'channel')}).`
		);
	const remarks: ReadRemark[] = [];
	describeLength(file, wave, data, present, sampleCount, remarks);
	const extra = chunks.filter(({ id }) => id === 'data').length - 1;
	if (extra > 0)
		remarks.push(
			warning(
				'wav-more-data',
				`${file.name} holds ${extra + 1} data chunks; only the first one was read. Export each recording to a file of its own.`
			)
		);
	if (wave.validBits !== null)
		remarks.push(
			note(
				'wav-valid-bits',
				`${file.name}: ${wave.validBits} bits of each sample are in use, at the upper end of its ${wave.words.split(' ')[0]} bits.`
			)
		);
	const bext = chunks.find(({ id }) => id === 'bext');
	const broadcast = bext ? readBroadcastExtension(file, bext, samplingRate_Hz, remarks) : null;
	const notes = notesOf(file, chunks, broadcast?.description ?? '');
	remarks.push(
		note(
			'wav-no-units',
			`${file.name} carries no units: its samples are parts of full scale. State for each channel what full scale means, such as 250 V or 25 A, before it is analysed.`
		),
		note(
			'wav-no-clock',
			broadcast?.start
				? `${file.name} tells when it was begun, but not in which time zone; the site’s time zone is used. Check the start against the recorder’s notes.`
				: `${file.name} tells neither when it was begun nor in which time zone; enter the start from the recorder’s notes.`
		)
	);
	const channels = Array.from({ length: wave.channelCount }, (_, index) => channelOf(index, wave));
	return ok({
		kind: 'waveform',
		format: 'WAV',
		variant: form === 'RIFF' ? wave.words : `${form}, ${wave.words}`,
		stationName: '',
		recorderName: broadcast?.recorderName ?? '',
		nominalFrequency_Hz: null,
		start: broadcast?.start ?? null,
		sampleCount,
		segments: [{ samplingRate_Hz, fromSample: 0, toSample: sampleCount }],
		timeStamps_s: null,
		channels,
		statusChannelNames: [],
		...(notes.length > 0 ? { notes } : {}),
		remarks,
		samples: rowsInFile(layoutOf(wave), file, data.start)
	});
}

/** What of the announced length is there. */
function describeLength(
	file: CaptureHandle,
	{ rowBytes }: WaveFormat,
	data: RiffChunk,
	present: number,
	sampleCount: number,
	remarks: ReadRemark[]
): void {
	const stated = data.stated_bytes;
	if (stated === null)
		remarks.push(
			note(
				'wav-size-open',
				`${file.name}, byte ${data.start - 4}: the length of the samples was left open by the recorder; they were read to the end of the file (${counted(sampleCount, 'sample')} a channel).`
			)
		);
	else if (stated > present) {
		const announced = Math.floor(stated / rowBytes);
		const missing = announced - sampleCount;
		const share = `${Number(((100 * missing) / announced).toPrecision(3))} %`;
		remarks.push(
			warning(
				'wav-truncated',
				`${file.name} announces ${counted(announced, 'sample')} a channel, but ends after ${sampleCount}; ${counted(missing, 'sample')} (${share}) are missing at the end.`
			)
		);
	}
	const surplus = present - sampleCount * rowBytes;
	if (surplus > 0)
		remarks.push(
			warning(
				'wav-cut-sample',
				`${file.name} ends in the middle of a sample: ${counted(surplus, 'byte')} after byte ${data.start + sampleCount * rowBytes} do not make up the ${rowBytes} bytes of a sample and were left out.`
			)
		);
}

function notesOf(file: CaptureHandle, chunks: RiffChunk[], description: string): RecordingNote[] {
	const info = chunks.filter(({ id }) => id === 'LIST').map((chunk) => readInfo(file, chunk));
	return [
		...(description === ''
			? []
			: [{ title: `Notes of the recording (description, ${file.name})`, text: description }]),
		...info.filter((one) => one !== null)
	];
}

const SIDES = ['left', 'right'];

function channelOf(index: number, { channelCount, format, factor, addition }: WaveFormat): SourceChannel {
	const side = channelCount === 2 ? ` (${SIDES[index]})` : '';
	const isFloat = format === 'float32' || format === 'float64';
	return {
		index,
		name: `Channel ${index + 1}${side}`,
		phaseHint: null,
		unitAsWritten: '',
		baseUnit: FULL_SCALE_UNIT,
		quantity: 'other',
		valuesAre: 'unknown',
		ratio: null,
		// Integers end one step below +1; floating point may go beyond full scale.
		range: isFloat ? null : { min: -1, max: format === 'uint8' ? 255 * factor + addition : 1 - factor }
	};
}

function layoutOf({ channelCount, rowBytes, format, factor, addition }: WaveFormat) {
	const channels = Array.from({ length: channelCount }, (_, index) => index);
	return {
		format,
		// Every integer is a value: in sound no number marks a missing sample.
		lowestIsValue: true,
		rowBytes,
		offsets: channels.map((channel) => (channel * rowBytes) / channelCount),
		factors: channels.map(() => factor),
		additions: channels.map(() => addition)
	};
}
