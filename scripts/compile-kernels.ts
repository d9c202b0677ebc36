import asc from 'assemblyscript/asc';

/** Entry of the kernels' sources, from the project's root. */
const ENTRY = 'src/lib/numerics/kernels/assembly/kernels.ts';
const OPTIONS = [
	...['--enable', 'simd', '--enable', 'bulk-memory'],
	...['--optimizeLevel', '3', '--shrinkLevel', '0', '--converge', '--noAssert'],
	// No allocator, no collector, no imports: all addresses come from the caller.
	...['--runtime', 'stub', '--use', 'abort=', '--initialMemory', '1']
];
/** Letters of base64 per line of the generated file. */
const LINE = 96;

/**
 * Compiles the signal kernels, the same bytes on every machine.
 * root     folder of the project
 * returns  text of src/lib/numerics/kernels/kernels-wasm.ts
 * throws   Error with the compiler's messages
 */
export async function compileKernels(root: string): Promise<string> {
	let bytes: Uint8Array | null = null;
	const { error, stderr } = await asc.main(
		[ENTRY, '--baseDir', root, '--outFile', 'kernels.wasm', ...OPTIONS],
		{
			writeFile: (_name, contents) => {
				bytes = typeof contents === 'string' ? Buffer.from(contents) : contents;
			}
		}
	);
	if (error || bytes === null) throw new Error(`The kernels do not compile: ${stderr.toString() || error}`);
	const text = Buffer.from(bytes).toString('base64');
	const lines = text.match(new RegExp(`.{1,${LINE}}`, 'g'))!;
	return (
		`// Generated from ${ENTRY} by \`npm run build:kernels\`; not to be edited.\n\n` +
		'/** The WebAssembly module of the signal kernels, base64. */\n' +
		`export const KERNELS_WASM_BASE64 =\n\t${lines.map((line) => `'${line}'`).join(' +\n\t')};\n`
	);
}
