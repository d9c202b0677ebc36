import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { expect, it } from 'vitest';
import { compileKernels } from '../../scripts/compile-kernels';

const root = fileURLToPath(new URL('../../', import.meta.url));

it('the committed WebAssembly module is what its sources compile to (else: npm run build:kernels)', async () => {
	const committed = readFileSync(`${root}src/lib/numerics/kernels/kernels-wasm.ts`, 'utf8');
	expect(committed).toBe(await compileKernels(root));
});
