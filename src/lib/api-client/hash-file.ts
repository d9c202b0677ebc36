import type { HashMessage } from './hash-file.worker';
import { RequestProblem } from './request-problem';

/**
 * SHA-256 of a file, lower-case hexadecimal, computed in a worker while it is read.
 * Rejects with RequestProblem when the file cannot be read, or with an AbortError when `signal` is aborted.
 */
export function hashFile(
	file: File,
	options: { signal: AbortSignal; onProgress: (hashed_bytes: number) => void }
): Promise<string> {
	options.signal.throwIfAborted();
	return new Promise<string>((resolve, reject) => {
		const worker = new Worker(new URL('./hash-file.worker.ts', import.meta.url), { type: 'module' });
		const end = (settle: () => void) => {
			worker.terminate();
			options.signal.removeEventListener('abort', stop);
			settle();
		};
		const unreadable = () =>
			end(() =>
				reject(
					new RequestProblem(
						`${file.name} cannot be read any more. Was it moved or changed? Choose it again.`
					)
				)
			);
		const stop = () => end(() => reject(new DOMException('stopped', 'AbortError')));
		options.signal.addEventListener('abort', stop, { once: true });
		worker.addEventListener('error', unreadable);
		worker.addEventListener('message', ({ data }: MessageEvent<HashMessage>) => {
			if ('hashed_bytes' in data) options.onProgress(data.hashed_bytes);
			else if ('sha256' in data) end(() => resolve(data.sha256));
			else unreadable();
		});
		worker.postMessage(file);
	});
}
