import { createScriptKernels } from './script-kernels';
import type { KernelShape, SignalKernels } from './signal-kernels';
import { createWasmKernels, wasmKernelsRun } from './wasm-kernels';

/**
 * Kernels of the given shape: in WebAssembly where it runs with vectors, in script elsewhere.
 * form     'script' asks for the plain form in any case
 */
export function createSignalKernels(
	shape: KernelShape,
	form: 'fastest' | 'script' = 'fastest'
): SignalKernels {
	return form === 'fastest' && wasmKernelsRun() ? createWasmKernels(shape) : createScriptKernels(shape);
}
