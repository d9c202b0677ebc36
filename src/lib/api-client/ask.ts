import { problemSentence, RequestProblem } from './request-problem';

/** A request to the application's own API; rejects with RequestProblem unless it succeeded or was aborted. */
export async function ask(path: string, init: RequestInit = {}): Promise<Response> {
	const response = await fetch(path, {
		...init,
		headers: { accept: 'application/json', ...init.headers }
	}).catch((cause: unknown) => {
		if (cause instanceof DOMException && cause.name === 'AbortError') throw cause;
		throw new RequestProblem('The server cannot be reached. Check the connection and try again.');
	});
	if (!response.ok) throw new RequestProblem(problemSentence(response.status, await response.text()));
	return response;
}
