import { availableParallelism } from 'node:os';
import { Piscina } from 'piscina';
import type { AnalystSetup, WindowBlock } from '../../../harmonics/engine/window-analyst';
import type { WindowTask } from '../../../harmonics/engine/window-tasks';
import type { RowLayout } from '../../../numerics/kernels/signal-kernels';
import type { RecordingFrame } from '../../../recording/sample-source';

/** A capture as a thread needs it: everything but the samples, and where those are. Plain data. */
export interface ThreadCapture {
	/** Names the run: a thread keeps its buffers as long as the name stays the same. */
	key: string;
	frame: RecordingFrame;
	path: string;
	layout: RowLayout;
	/** Byte of the file where row 0 begins. */
	firstByte: number;
}

export interface ThreadTask extends WindowTask {
	capture: ThreadCapture;
	setup: AnalystSetup;
}

/** Threads that turn placed windows into figures; one for each core. */
export interface WindowPool {
	threadCount: number;
	run(task: ThreadTask): Promise<WindowBlock>;
	close(): Promise<void>;
}

/** Threads end when nothing was asked of them for so long. */
const IDLE_MS = 30_000;

/** A thread's own objects are few; a small nursery keeps what the garbage collector has not looked at yet from piling up. */
const THREAD_MEMORY = { maxYoungGenerationSizeMb: 4, maxOldGenerationSizeMb: 128 } as const;

/**
 * threadFile  compiled window-thread, or its source where the process itself runs sources
 */
export function createWindowPool(threadFile: string): WindowPool {
	const threadCount = availableParallelism();
	const pool = new Piscina<ThreadTask, WindowBlock>({
		filename: threadFile,
		name: 'analyseWindows',
		minThreads: 0,
		maxThreads: threadCount,
		idleTimeout: IDLE_MS,
		resourceLimits: THREAD_MEMORY,
		...(threadFile.endsWith('.ts') ? { execArgv: ['--import', 'tsx'] } : {})
	});
	return {
		threadCount,
		run: (task) => pool.run(task),
		close: () => pool.destroy()
	};
}
