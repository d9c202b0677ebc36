import { ask } from './ask';

export interface IntakeOutcome {
	jobs: { jobId: string; name: string; files: string[] }[];
	problems: { files: string[]; sentence: string }[];
	duplicates: { captureId: string; captureName: string; files: string[] }[];
}

export interface WaveformSlice {
	from_s: number;
	to_s: number;
	duration_s: number;
	sampleCount: number;
	decimated: boolean;
	channels: { channelIndex: number; points: (number | null)[] }[];
}

/** Hands uploaded files over to be sorted into sets and read. */
export async function takeInUploads(surveyId: string, uploadIds: readonly string[]): Promise<IntakeOutcome> {
	const response = await ask(`/api/v1/surveys/${surveyId}/captures`, {
		method: 'POST',
		headers: { 'content-type': 'application/json' },
		body: JSON.stringify({ uploadIds })
	});
	return response.json();
}

export async function discardUpload(surveyId: string, uploadId: string): Promise<void> {
	await ask(`/api/v1/surveys/${surveyId}/uploads/${uploadId}`, { method: 'DELETE' });
}

export async function cancelJob(jobId: string): Promise<void> {
	await ask(`/api/v1/jobs/${jobId}/cancel`, { method: 'POST' });
}

/** Points of a stretch of an analysed waveform; about `points` a channel. */
export async function fetchWaveform(
	captureId: string,
	range: { from_s: number; to_s: number; points: number; channels?: readonly number[] },
	signal: AbortSignal
): Promise<WaveformSlice> {
	const query = new URLSearchParams({
		from_s: String(range.from_s),
		to_s: String(range.to_s),
		points: String(range.points)
	});
	if (range.channels) query.set('channels', range.channels.join());
	const response = await ask(`/api/v1/captures/${captureId}/waveform?${query}`, { signal });
	return response.json();
}
