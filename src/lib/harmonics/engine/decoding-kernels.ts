import { createSignalKernels } from '../../numerics/kernels/create-kernels';
import type { SignalKernels } from '../../numerics/kernels/signal-kernels';

/** The smallest transform that kernels can be made with: these only decode and hold samples. */
const IDLE = { points: 64, lineCount: 1, kernel: { cutoff: 0.25, halfWidth: 4, beta: 10 } };
const RAW_BYTES = 1 << 18;

/** Buffers that rows of bytes can be decoded into, without anything to transform them. */
export function createDecodingKernels(
	channelCount: number,
	capacity: number,
	rowBytes: number
): SignalKernels {
	return createSignalKernels({ ...IDLE, channelCount, capacity, rawCapacity: Math.max(RAW_BYTES, rowBytes) });
}
