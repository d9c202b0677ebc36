import { pairByContent, type CandidateFile } from '../../../recording/pair-by-content';
import type { Db } from '../../db/database';
import type { UploadRow } from '../../db/rows';
import { recogniseCapture } from '../../jobs/recognise-capture.job';
import { unpackArchiveJob } from '../../jobs/unpack-archive.job';
import { capturesRepository } from '../../repositories/captures.repository';
import { uploadsRepository } from '../../repositories/uploads.repository';
import type { ServiceDeps } from '../../service-deps';
import { looksLikeArchive } from '../../storage/archive';

/** What became of the files handed in together. */
export interface IntakeOutcome {
	/** One job per set of files that belongs together, and one per archive. */
	jobs: { jobId: string; name: string; files: string[] }[];
	/** Files that cannot become a capture, each with a sentence that says what to do. */
	problems: { files: string[]; sentence: string }[];
	/** Sets whose content is in the survey already. */
	duplicates: { captureId: string; captureName: string; files: string[] }[];
}

/** Who handed the files in. */
export interface Sender {
	practiceId: string;
	userId: string;
	name: string;
}

/** Enough of a file to tell what it is, and the whole of a configuration. */
const HEAD_BYTES = 16_384;

type Candidate = CandidateFile & { row: UploadRow };

/**
 * Sorts received files into sets by what they are and queues the reading of each, inside the caller's transaction. What
 * cannot be used is let go of at once.
 */
export async function sortIntoCaptures(
	trx: Db,
	{ jobs, blobs }: Pick<ServiceDeps, 'jobs' | 'blobs'>,
	sender: Sender,
	surveyId: string,
	rows: readonly UploadRow[]
): Promise<IntakeOutcome> {
	const outcome: IntakeOutcome = { jobs: [], problems: [], duplicates: [] };
	// The practice alone: an actor's client is none of this.
	const scope = { practiceId: sender.practiceId };
	const claimed = new Set<string>();
	const seen = new Map<string, string[]>();
	const requestedBy = { userId: sender.userId, name: sender.name };
	const candidates: Candidate[] = [];
	for (const row of rows) {
		const head = await blobs.readSlice(row.sha256, 0, HEAD_BYTES);
		if (!looksLikeArchive(head)) {
			candidates.push({ row, name: row.name, size_bytes: row.size_bytes, head });
			continue;
		}
		claimed.add(row.id);
		const jobId = await jobs.enqueue(
			trx,
			unpackArchiveJob,
			{ surveyId, uploadId: row.id, name: row.name, requestedBy },
			{ practiceId: sender.practiceId }
		);
		outcome.jobs.push({ jobId, name: row.name, files: [row.name] });
	}
	for (const { files: set, incomplete } of pairByContent(candidates)) {
		const files = set.map(({ name }) => name);
		const hashes = set.map(({ row }) => row.sha256);
		const content = [...hashes].sort().join();
		const twin = await capturesRepository(trx, scope).withSameContent(surveyId, hashes);
		const sameNow = seen.get(content);
		if (incomplete) outcome.problems.push({ files, sentence: incomplete });
		else if (twin) outcome.duplicates.push({ captureId: twin.id, captureName: twin.name, files });
		else if (sameNow)
			outcome.problems.push({
				files,
				sentence: `${files.join(' and ')} has the same content as ${sameNow.join(' and ')}, which is read once.`
			});
		else {
			seen.set(content, files);
			for (const { row } of set) claimed.add(row.id);
			const name = captureName(files);
			const jobId = await jobs.enqueue(
				trx,
				recogniseCapture,
				{ surveyId, uploadIds: set.map(({ row }) => row.id), name, requestedBy },
				{ practiceId: sender.practiceId }
			);
			outcome.jobs.push({ jobId, name, files });
		}
	}
	await uploadsRepository(trx, scope).remove(rows.filter((row) => !claimed.has(row.id)).map((row) => row.id));
	return outcome;
}

/** A set goes by its stem, a single file by its whole name. */
function captureName(files: readonly string[]): string {
	const first = files[0] ?? '';
	return files.length > 1 ? first.replace(/\.[^.]*$/, '') : first;
}
