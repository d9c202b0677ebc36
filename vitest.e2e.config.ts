import { fileURLToPath } from 'node:url';
import { defineConfig } from 'vitest/config';

// Browser tests: one built product, started once by the supervisor as its users start it, one browser.
export default defineConfig({
	resolve: { alias: { $lib: fileURLToPath(new URL('./src/lib', import.meta.url)) } },
	test: {
		include: ['tests/e2e/**/*.test.ts'],
		globalSetup: ['tests/e2e/support/global-setup.ts'],
		environment: 'node',
		fileParallelism: false,
		testTimeout: 240_000,
		hookTimeout: 120_000
	}
});
