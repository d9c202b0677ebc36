// The analysis worker is its own Node program. It is built after the application, because the
// adapter empties build/ first.
import { fileURLToPath } from 'node:url';
import { defineConfig } from 'vite';

export default defineConfig({
	publicDir: false,
	resolve: { alias: { $lib: fileURLToPath(new URL('./src/lib', import.meta.url)) } },
	build: {
		ssr: true,
		rollupOptions: {
			input: {
				main: 'src/lib/server/worker/main.ts',
				'window-thread': 'src/lib/server/analysis/pool/window-thread.ts'
			}
		},
		outDir: 'build/worker',
		emptyOutDir: true,
		target: 'node20'
	}
});
