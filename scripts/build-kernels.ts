import { writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { compileKernels } from './compile-kernels';

// Run with: npm run build:kernels
const root = fileURLToPath(new URL('..', import.meta.url));
writeFileSync(join(root, 'src/lib/numerics/kernels/kernels-wasm.ts'), await compileKernels(root));
