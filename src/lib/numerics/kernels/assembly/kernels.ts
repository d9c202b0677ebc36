// Entry of the WebAssembly module: what wasm-kernels.ts calls.
export { decodeFloat32, decodeInt16, decodeInt32, slide, stretch } from './samples';
export { interpolate } from './interpolation';
export { transform } from './transform';
