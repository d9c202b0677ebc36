import { fileURLToPath } from 'node:url';
import { defineConfig } from 'vitest/config';

const alias = { $lib: fileURLToPath(new URL('./src/lib', import.meta.url)) };

// Browser tests have a configuration of their own (vitest.e2e.config.ts): they need a built app.
export default defineConfig({
	resolve: { alias },
	test: {
		include: ['tests/**/*.test.ts'],
		exclude: ['tests/e2e/**'],
		environment: 'node',
		testTimeout: 60_000,
		hookTimeout: 60_000
	}
});
