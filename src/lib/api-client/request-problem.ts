/** The sentence of a refused request; the server's own where it sent one. */
export function problemSentence(status: number, body: string): string {
	try {
		const parsed: unknown = JSON.parse(body);
		if (typeof parsed === 'object' && parsed !== null && 'message' in parsed)
			return String((parsed as { message: unknown }).message);
	} catch {
		// Not from the application: a proxy, or a cut connection.
	}
	if (status === 401) return 'Your session has ended. Sign in again in another tab, then repeat this.';
	if (status === 413) return 'The file is larger than this installation takes.';
	return `The server did not take this (status ${status}). Try again in a moment.`;
}

/** A request whose refusal has a sentence for the person. */
export class RequestProblem extends Error {}
