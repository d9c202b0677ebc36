// One command for every test: installs, builds, then unit and integration tests, then the browser tests.
import { existsSync } from 'node:fs';
import { spawnSync } from 'node:child_process';
import { ensureBuild, ensurePackages, requireNode, run } from './ensure-installed.mjs';

requireNode();
ensurePackages();

/** Debian's Chromium: found, installed where that is possible, or asked for in one line. */
function ensureChromium() {
	const candidates = [process.env.CHROMIUM_PATH, '/usr/bin/chromium', '/usr/bin/chromium-browser'].filter(
		Boolean
	);
	const found = candidates.find((path) => existsSync(path));
	if (found) return found;
	if (process.getuid?.() === 0 && existsSync('/usr/bin/apt-get')) {
		console.log('Installing Chromium for the browser tests …');
		spawnSync('apt-get', ['update'], { stdio: 'ignore' });
		spawnSync('apt-get', ['install', '-y', '--no-install-recommends', 'chromium'], { stdio: 'inherit' });
		if (existsSync('/usr/bin/chromium')) return '/usr/bin/chromium';
	}
	console.error(
		'The browser tests need Chromium: "sudo apt-get install chromium", or set CHROMIUM_PATH to its executable.'
	);
	process.exit(2);
}

const chromium = ensureChromium();
ensureBuild();
const args = process.argv.slice(2);
run('npx', ['vitest', 'run', ...args]);
if (args.length === 0)
	run('npx', ['vitest', 'run', '--config', 'vitest.e2e.config.ts'], {
		env: { ...process.env, CHROMIUM_PATH: chromium }
	});
