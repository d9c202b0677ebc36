import { problemSentence, RequestProblem } from './request-problem';

export interface UploadedFile {
	id: string;
	name: string;
	size_bytes: number;
	sha256: string;
}

/**
 * Sends one file as the raw body. XMLHttpRequest, because fetch does not tell how many bytes have left.
 * Rejects with RequestProblem, or with an AbortError when `signal` is aborted.
 */
export function uploadFile(
	surveyId: string,
	file: File,
	options: { signal: AbortSignal; onProgress: (sent_bytes: number) => void }
): Promise<UploadedFile> {
	return new Promise((resolve, reject) => {
		const request = new XMLHttpRequest();
		request.open('PUT', `/api/v1/surveys/${surveyId}/uploads?name=${encodeURIComponent(file.name)}`);
		request.setRequestHeader('content-type', 'application/octet-stream');
		request.setRequestHeader('accept', 'application/json');
		request.upload.addEventListener('progress', (event) => options.onProgress(event.loaded));
		request.addEventListener('load', () => {
			if (request.status >= 200 && request.status < 300) resolve(JSON.parse(request.responseText));
			else reject(new RequestProblem(problemSentence(request.status, request.responseText)));
		});
		request.addEventListener('error', () =>
			reject(
				new RequestProblem(
					`${file.name} did not arrive: the connection was cut or the file is too large. Check both and choose it again.`
				)
			)
		);
		request.addEventListener('abort', () => reject(new DOMException('cancelled', 'AbortError')));
		options.signal.addEventListener('abort', () => request.abort(), { once: true });
		request.send(file);
	});
}
