import { openCapture, type OpenedCapture } from '../../recording/read-capture';
import { parseToldLayout } from '../../recording/readers/delimited-text/table-layout-told';
import type { Container } from '../container';
import type { CaptureFileRow, CaptureRow } from '../db/rows';
import { capturesRepository } from '../repositories/captures.repository';
import { openFileHandle, type FileHandle } from '../storage/file-handle';
import { createScratchFolder, scratchRoot } from '../storage/scratch-folder';
import { JobFailed, type JobContext } from './job-definition';

/** A capture opened from its originals, and the originals themselves, each with its handle. */
export interface OpenedOriginals {
	content: OpenedCapture;
	files: CaptureFileRow[];
	handles: FileHandle[];
	close: () => void;
}

/** Opens the stored originals; what they hold may still be in them, so close them only at the very end. */
export async function openOriginals(
	container: Container,
	capture: CaptureRow,
	context: JobContext
): Promise<OpenedOriginals> {
	const files = await capturesRepository(container.db, context).filesOf([capture.id]);
	const total_bytes = files.reduce((sum, file) => sum + file.size_bytes, 0);
	let done_bytes = 0;
	const handles: FileHandle[] = [];
	const scratch = createScratchFolder(scratchRoot(container.config.dataDir));
	const close = () => {
		handles.forEach((handle) => handle.close());
		scratch.close();
	};
	try {
		for (const file of files) {
			await context.progress(done_bytes, total_bytes + 1, `reading ${file.name}`);
			handles.push(openFileHandle(file.name, await container.blobs.localFile(file.sha256)));
			done_bytes += file.size_bytes;
		}
		const opened = openCapture(handles, {
			part: capture.part_key,
			scratch,
			...(capture.layout_json === null ? {} : { layout: parseToldLayout(capture.layout_json) })
		});
		if (!opened.ok) throw new JobFailed(opened.problem.sentence);
		return { content: opened.value, files, handles, close };
	} catch (cause) {
		close();
		throw cause;
	}
}
