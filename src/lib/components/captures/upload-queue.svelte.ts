import { discardUpload, takeInUploads, type IntakeOutcome } from '$lib/api-client/captures';
import { RequestProblem } from '$lib/api-client/request-problem';
import { uploadFile } from '$lib/api-client/upload-file';

export interface UploadItem {
	key: number;
	name: string;
	size_bytes: number;
	sent_bytes: number;
	status: 'waiting' | 'sending' | 'arrived' | 'failed' | 'cancelled';
	problem: string;
}

/**
 * Files chosen together travel one after the other; when all have arrived they are handed over as one lot, so that
 * the files of a set find each other. Cancelling lets go of what had already arrived.
 */
export class UploadQueue {
	items = $state<UploadItem[]>([]);
	/** True from the first byte until the lot has been handed over. */
	busy = $state(false);
	outcome = $state<IntakeOutcome | null>(null);
	problem = $state('');

	sent_bytes = $derived(this.items.reduce((sum, item) => sum + item.sent_bytes, 0));
	total_bytes = $derived(this.items.reduce((sum, item) => sum + item.size_bytes, 0));

	#surveyId: string;
	#onHandedOver: (outcome: IntakeOutcome) => void;
	#abort = new AbortController();
	#nextKey = 0;

	constructor(surveyId: string, onHandedOver: (outcome: IntakeOutcome) => void) {
		this.#surveyId = surveyId;
		this.#onHandedOver = onHandedOver;
	}

	async send(files: readonly File[]): Promise<void> {
		if (this.busy || files.length === 0) return;
		this.#abort = new AbortController();
		this.outcome = null;
		this.problem = '';
		this.busy = true;
		this.items = files.map((file) => ({
			key: this.#nextKey++,
			name: file.name,
			size_bytes: file.size,
			sent_bytes: 0,
			status: 'waiting',
			problem: ''
		}));
		const arrived: string[] = [];
		try {
			for (const [i, file] of files.entries()) {
				const id = await this.#sendOne(this.items[i]!, file);
				if (id !== null) arrived.push(id);
			}
			if (arrived.length > 0) await this.#handOver(arrived);
		} catch (cause) {
			if (!this.#abort.signal.aborted) this.problem = sentenceOf(cause);
			await this.#letGo(arrived);
		} finally {
			this.busy = false;
		}
	}

	cancel(): void {
		this.#abort.abort();
	}

	/** The upload's id; null when this file alone failed. Throws when the whole lot was cancelled. */
	async #sendOne(item: UploadItem, file: File): Promise<string | null> {
		this.#abort.signal.throwIfAborted();
		item.status = 'sending';
		try {
			const received = await uploadFile(this.#surveyId, file, {
				signal: this.#abort.signal,
				onProgress: (sent_bytes) => (item.sent_bytes = Math.min(sent_bytes, item.size_bytes))
			});
			item.sent_bytes = item.size_bytes;
			item.status = 'arrived';
			return received.id;
		} catch (cause) {
			if (this.#abort.signal.aborted) {
				for (const other of this.items) if (other.status !== 'failed') other.status = 'cancelled';
				throw cause;
			}
			item.status = 'failed';
			item.problem = sentenceOf(cause);
			return null;
		}
	}

	async #handOver(uploadIds: string[]): Promise<void> {
		const outcome = await takeInUploads(this.#surveyId, uploadIds);
		this.outcome = outcome;
		this.items = this.items.filter((item) => item.status === 'failed');
		this.#onHandedOver(outcome);
	}

	/** Best effort: what stays behind is cleared away by the server after a day. */
	async #letGo(uploadIds: readonly string[]): Promise<void> {
		await Promise.allSettled(uploadIds.map((id) => discardUpload(this.#surveyId, id)));
	}
}

function sentenceOf(cause: unknown): string {
	return cause instanceof RequestProblem
		? cause.message
		: 'Something went wrong in this page. Reload it and choose the files again.';
}
