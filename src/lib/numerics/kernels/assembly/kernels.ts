// Entry of the WebAssembly module: what wasm-kernels.ts calls.
export {
	decodeFloat32,
	decodeFloat64,
	decodeInt16,
	decodeInt24,
	decodeInt32,
	decodeUint8,
	decodeWholeInt16,
	decodeWholeInt32,
	slide,
	stretch
} from './samples';
export { interpolate } from './interpolation';
export { transform } from './transform';
