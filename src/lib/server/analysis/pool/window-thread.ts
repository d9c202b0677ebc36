/** What runs in each thread of the window pool: decodes, interpolates and transforms the windows it is given. */
import { WindowAnalyst, type WindowBlock } from '../../../harmonics/engine/window-analyst';
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

function sourceIn({ frame, layout }: ThreadCapture, file: FileHandle) {
	return {
		...frame,
		samples: {
			kind: 'rows' as const,
			layout,
			read: (fromRow: number, count: number, into: Uint8Array) =>
				file.read(fromRow * layout.rowBytes, into.subarray(0, count * layout.rowBytes))
		}
	};
}

export default function analyseWindows(task: ThreadTask): WindowBlock {
	return hold(task).analyst.analyse(task.windows);
}
