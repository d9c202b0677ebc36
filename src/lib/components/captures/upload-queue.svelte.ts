import { discardUpload, takeInUploads, type IntakeOutcome } from '$lib/api-client/captures';
import { hashFile } from '$lib/api-client/hash-file';
import { RequestProblem } from '$lib/api-client/request-problem';
import {
	discardInterrupted,
	interruptedUploads,
	lookUpFile,
	takeHeldFile,
	uploadFile,
	type HeldOriginal,
	type InterruptedUpload
} from '$lib/api-client/upload-file';

export interface UploadItem {
	key: number;
	name: string;
	size_bytes: number;
	hashed_bytes: number;
	sent_bytes: number;
	/** Bytes that were there from an earlier try. */
	resumed_bytes: number;
	status: 'waiting' | 'hashing' | 'sending' | 'paused' | 'arrived' | 'refused' | 'cancelled';
	problem: string;
}

/** A file that was not sent, because the practice holds its content already. */
export interface NotSent {
	name: string;
	held: HeldOriginal;
}

interface Entry {
	file: File;
	sha256: string | null;
	uploadId: string | null;
}

const AT_ONCE = 3;
const SPEED_OVER_MS = 10_000;

/**
 * Files chosen together travel side by side; when all have arrived they are handed over as one lot, so that the
 * files of a set find each other. Each is hashed first: the server then knows whether it holds it, and where an
 * earlier try stopped. A file that is refused holds the lot until it is tried again or left out. Pausing keeps what has arrived; cancelling lets go of it.
 */
export class UploadQueue {
	items = $state<UploadItem[]>([]);
	/** True from the first byte until the lot has been handed over. */
	busy = $state(false);
	paused = $state(false);
	outcome = $state<IntakeOutcome | null>(null);
	problem = $state('');
	interrupted = $state<InterruptedUpload[]>([]);
	/** Seconds until all is sent, at the speed of the last ten; null before that can be told. */
	remaining_s = $state<number | null>(null);

	sent_bytes = $derived(this.items.reduce((sum, item) => sum + item.sent_bytes, 0));
	hashed_bytes = $derived(this.items.reduce((sum, item) => sum + item.hashed_bytes, 0));
	total_bytes = $derived(this.items.reduce((sum, item) => sum + item.size_bytes, 0));
	/** Files that wait for a word: try again, or leave out. */
	refused = $derived(this.items.filter((item) => item.status === 'refused').length);
	/** Files of other surveys' content that were used without being sent again. */
	notSent = $state<NotSent[]>([]);

	#surveyId: string;
	#onHandedOver: (outcome: IntakeOutcome) => void;
	#abort = new AbortController();
	#nextKey = 0;
	// eslint-disable-next-line svelte/prefer-svelte-reactivity -- nothing is drawn from it
	#entries = new Map<number, Entry>();
	#speed: { at_ms: number; sent_bytes: number }[] = [];

	constructor(surveyId: string, onHandedOver: (outcome: IntakeOutcome) => void) {
		this.#surveyId = surveyId;
		this.#onHandedOver = onHandedOver;
	}

	/** Uploads of this person that broke off earlier. */
	async loadInterrupted(): Promise<void> {
		this.interrupted = await interruptedUploads(this.#surveyId).catch(() => []);
	}

	async discardInterrupted(id: string): Promise<void> {
		try {
			await discardInterrupted(this.#surveyId, id);
		} catch (cause) {
			this.problem = sentenceOf(cause);
		}
		await this.loadInterrupted();
	}

	async send(files: readonly File[]): Promise<void> {
		if (this.busy || files.length === 0) return;
		this.#entries.clear();
		this.outcome = null;
		this.notSent = [];
		this.items = files.map((file) => {
			const key = this.#nextKey++;
			this.#entries.set(key, { file, sha256: null, uploadId: null });
			return {
				key,
				name: file.name,
				size_bytes: file.size,
				hashed_bytes: 0,
				sent_bytes: 0,
				resumed_bytes: 0,
				status: 'waiting',
				problem: ''
			};
		});
		await this.#run();
	}

	/** Stops sending; what has arrived stays for going on. */
	pause(): void {
		this.paused = true;
		this.#abort.abort();
	}

	async resume(): Promise<void> {
		for (const item of this.items) if (item.status === 'paused') item.status = 'waiting';
		await this.#run();
	}

	/** Tries again what was refused, and goes on from where it stopped. */
	async retry(): Promise<void> {
		for (const item of this.items) if (item.status === 'refused') item.status = 'waiting';
		await this.#run();
	}

	/** Takes one file out of the lot; the others go on. */
	async leaveOut(item: UploadItem): Promise<void> {
		this.items = this.items.filter((other) => other.key !== item.key);
		this.#entries.delete(item.key);
		if (!this.busy && this.items.length > 0) await this.#run();
	}

	async cancel(): Promise<void> {
		this.#abort.abort();
		const arrived = [...this.#entries.values()].flatMap(({ uploadId }) => uploadId ?? []);
		for (const item of this.items) if (item.status !== 'refused') item.status = 'cancelled';
		this.paused = false;
		this.busy = false;
		// Best effort: what stays behind is cleared away by the server.
		await Promise.allSettled(arrived.map((id) => discardUpload(this.#surveyId, id)));
		this.#entries.clear();
		await this.loadInterrupted();
	}

	async #run(): Promise<void> {
		this.#abort = new AbortController();
		const { signal } = this.#abort;
		this.paused = false;
		this.problem = '';
		this.busy = true;
		this.remaining_s = null;
		this.#speed = [];
		const waiting = this.items.filter((item) => item.status === 'waiting');
		const worker = async () => {
			for (let item = waiting.shift(); item && !signal.aborted; item = waiting.shift())
				await this.#bring(item, signal);
		};
		await Promise.all(Array.from({ length: AT_ONCE }, worker));
		if (signal.aborted) {
			if (this.paused) for (const item of this.items) if (item.status === 'waiting') item.status = 'paused';
			return;
		}
		this.busy = false;
		if (this.refused === 0) await this.#handOver();
	}

	/** Hashes, asks and sends one file; its own failure does not stop the others. */
	async #bring(item: UploadItem, signal: AbortSignal): Promise<void> {
		const entry = this.#entries.get(item.key);
		if (!entry) return;
		item.problem = '';
		try {
			if (entry.sha256 === null) {
				item.status = 'hashing';
				const onProgress = (hashed_bytes: number) => (item.hashed_bytes = hashed_bytes);
				entry.sha256 = await hashFile(entry.file, { signal, onProgress });
			}
			const { sha256 } = entry;
			const known = await lookUpFile(this.#surveyId, { sha256, size_bytes: entry.file.size }, signal);
			if (known.held) {
				entry.uploadId = (await takeHeldFile(this.#surveyId, { sha256, name: item.name })).id;
				if (!known.held.here) this.notSent.push({ name: item.name, held: known.held });
			} else {
				item.status = 'sending';
				item.resumed_bytes = known.session?.received_bytes ?? 0;
				const received = await uploadFile(this.#surveyId, entry.file, {
					sha256,
					sessionId: known.session?.id ?? null,
					signal,
					onProgress: (sent_bytes) => this.#noteSent(item, sent_bytes)
				});
				entry.uploadId = received.id;
			}
			item.sent_bytes = item.size_bytes;
			item.status = 'arrived';
		} catch (cause) {
			if (signal.aborted) item.status = this.paused ? 'paused' : 'cancelled';
			else {
				item.status = 'refused';
				item.problem = sentenceOf(cause);
			}
		}
	}

	#noteSent(item: UploadItem, sent_bytes: number): void {
		item.sent_bytes = Math.min(sent_bytes, item.size_bytes);
		const at_ms = performance.now();
		this.#speed.push({ at_ms, sent_bytes: this.sent_bytes });
		while (this.#speed.length > 2 && at_ms - this.#speed[0]!.at_ms > SPEED_OVER_MS) this.#speed.shift();
		const first = this.#speed[0]!;
		const elapsed_s = (at_ms - first.at_ms) / 1000;
		const moved_bytes = this.sent_bytes - first.sent_bytes;
		if (elapsed_s > 1 && moved_bytes > 0)
			this.remaining_s = ((this.total_bytes - this.sent_bytes) * elapsed_s) / moved_bytes;
	}

	async #handOver(): Promise<void> {
		const uploadIds = [...this.#entries.values()].flatMap(({ uploadId }) => uploadId ?? []);
		if (uploadIds.length === 0) return;
		try {
			const outcome = await takeInUploads(this.#surveyId, uploadIds);
			this.outcome = outcome;
			this.items = [];
			this.#entries.clear();
			this.#onHandedOver(outcome);
		} catch (cause) {
			this.problem = sentenceOf(cause);
		}
		await this.loadInterrupted();
	}
}

function sentenceOf(cause: unknown): string {
	return cause instanceof RequestProblem
		? cause.message
		: 'Something went wrong in this page. Reload it and choose the files again.';
}
