import { fileURLToPath } from 'node:url';
import { build } from 'vite';

const path = (relative: string) => fileURLToPath(new URL(relative, import.meta.url));

/** Compiles the processes under measurement as the worker is compiled; dependencies stay where they are. */
export async function compileChildren(folder: string): Promise<void> {
	await build({
		configFile: false,
		publicDir: false,
		logLevel: 'error',
		resolve: { alias: { $lib: path('../../src/lib') } },
		build: {
			ssr: true,
			rollupOptions: {
				input: {
					'analysis-child': path('analysis-child.ts'),
					'stage-child': path('stage-child.ts'),
					'window-thread': path('../../src/lib/server/analysis/pool/window-thread.ts')
				}
			},
			outDir: folder,
			emptyOutDir: true,
			target: 'node20'
		}
	});
}
