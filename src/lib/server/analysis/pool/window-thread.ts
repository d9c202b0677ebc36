/** What runs in each thread of the window pool: decodes, interpolates and transforms the windows it is given. */
import { WindowAnalyst, type WindowBlock } from '../../../harmonics/engine/window-analyst';
import { rowsInFile } from '../../../recording/sample-source';
import { openFileHandle, type FileHandle } from '../../storage/file-handle';
import type { ThreadCapture, ThreadTask } from './window-pool';

interface Held {
	key: string;
	planIndex: number;
	file: FileHandle;
	analyst: WindowAnalyst;
}

let held: Held | null = null;

function hold({ capture, setup, planIndex }: ThreadTask): Held {
	if (held?.key === capture.key && held.planIndex === planIndex) return held;
	held?.file.close();
	held = null;
	const file = openFileHandle(capture.path, capture.path);
	held = { key: capture.key, planIndex, file, analyst: new WindowAnalyst(sourceIn(capture, file), setup) };
	return held;
}

function sourceIn({ frame, layout, firstByte }: ThreadCapture, file: FileHandle) {
	return { ...frame, samples: rowsInFile(layout, file, firstByte) };
}

/**
 * What the pool calls with each task. The block is copied to the caller, not handed over: pages that were handed over would
 * have to be asked of the system anew for every block, which costs more than the copying.
 */
export function analyseWindows(task: ThreadTask): WindowBlock {
	return hold(task).analyst.analyse(task.windows);
}
