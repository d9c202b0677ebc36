import { decodeTile, type Tile } from '$lib/recording/pyramid/tile-codec';
import type { Phase } from '$lib/recording/phase';
import { problemSentence, RequestProblem } from './request-problem';

async function get(path: string, signal: AbortSignal): Promise<Response> {
	const response = await fetch(path, { signal }).catch((cause: unknown) => {
		if (cause instanceof DOMException && cause.name === 'AbortError') throw cause;
		throw new RequestProblem('The server cannot be reached. Check the connection and try again.');
	});
	if (!response.ok) throw new RequestProblem(problemSentence(response.status, await response.text()));
	return response;
}

/** of  hash of the pyramid: tiles under one hash never change, so the browser keeps them */
export async function fetchTile(
	captureId: string,
	of: string,
	level: number,
	tile: number,
	channels: readonly number[],
	signal: AbortSignal
): Promise<Tile> {
	const query = new URLSearchParams({ channels: channels.join(), of: of.slice(0, 16) });
	const response = await get(`/api/v1/captures/${captureId}/tiles/${level}/${tile}?${query}`, signal);
	return decodeTile(await response.arrayBuffer());
}

export interface WindowFigures {
	window: number;
	from_s: number;
	to_s: number;
	flagged: boolean;
	channels: {
		channelIndex: number;
		quantity: 'voltage' | 'current';
		phase: Phase;
		label: string;
		rms: number | null;
		/** Index = order. */
		subgroups: (number | null)[];
	}[];
}

/** The harmonic window over an instant; null in a gap. */
export async function fetchWindow(
	captureId: string,
	at_s: number,
	signal: AbortSignal
): Promise<WindowFigures | null> {
	return (await get(`/api/v1/captures/${captureId}/window?at_s=${at_s}`, signal)).json();
}
