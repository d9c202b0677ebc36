/** What runs in each thread of the window pool: decodes, interpolates and transforms the windows it is given. */
import { move, transferableSymbol, valueSymbol } from 'piscina';
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

/** Buffers of all typed arrays in a block: they are handed over, not copied. */
function buffersOf(value: unknown, found: Set<ArrayBuffer> = new Set()): Set<ArrayBuffer> {
	if (ArrayBuffer.isView(value)) found.add(value.buffer as ArrayBuffer);
	else if (typeof value === 'object' && value !== null)
		for (const member of Object.values(value)) buffersOf(member, found);
	return found;
}

/** What the pool calls with each task. */
export function analyseWindows(task: ThreadTask): WindowBlock {
	const block = hold(task).analyst.analyse(task.windows);
	const handedOver = {
		get [transferableSymbol]() {
			return [...buffersOf(block.channels), ...buffersOf(block.powers), ...buffersOf(block.halfCycles)];
		},
		get [valueSymbol]() {
			return block;
		}
	};
	return move(handedOver as never) as never;
}
