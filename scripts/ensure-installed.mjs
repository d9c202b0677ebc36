// What "npm run demo" and "npm test" share: they must work on a clone where nothing has been installed yet,
// so this file uses nothing but Node itself.
import { spawnSync } from 'node:child_process';
import { existsSync, readFileSync, statSync } from 'node:fs';

/** Runs a command with inherited output; ends the process with its code when it fails. */
export function run(command, args, options = {}) {
	const { status } = spawnSync(command, args, { stdio: 'inherit', ...options });
	if (status !== 0) process.exit(status ?? 1);
}

export function requireNode() {
	const [major, minor] = process.versions.node.split('.').map(Number);
	if (major < 20 || (major === 20 && minor < 19)) {
		console.error(`Sinewright needs Node.js 20.19 or later; this is ${process.version}.`);
		process.exit(2);
	}
}

/** Installs the packages of the lock file unless node_modules already matches it. */
export function ensurePackages() {
	const installed = 'node_modules/.package-lock.json';
	if (existsSync(installed) && statSync(installed).mtimeMs >= statSync('package-lock.json').mtimeMs - 1000) {
		const wanted = JSON.parse(readFileSync('package-lock.json', 'utf8')).packages;
		const have = JSON.parse(readFileSync(installed, 'utf8')).packages;
		const missing = Object.keys(have).some((name) => wanted[name]?.version !== have[name].version);
		if (!missing) return;
	}
	console.log('Installing packages (the first time this takes about two minutes: SQLite is compiled) …');
	run('npm', ['ci', '--no-audit', '--no-fund']);
}

/** Builds the app and the worker unless the build is newer than every source. */
export function ensureBuild({ force = false } = {}) {
	if (!force && existsSync('build/index.js') && existsSync('build/worker/main.js')) {
		const built = statSync('build/worker/main.js').mtimeMs;
		const { stdout } = spawnSync(
			'find',
			[
				'src',
				'static',
				'package-lock.json',
				'svelte.config.js',
				'vite.config.ts',
				'tailwind.config.js',
				'-newermt',
				new Date(built).toISOString(),
				'-type',
				'f'
			],
			{ encoding: 'utf8' }
		);
		if (stdout.trim() === '') return;
	}
	console.log('Building …');
	run('npm', ['run', '--silent', 'build'], { env: { ...process.env, NODE_ENV: 'production' } });
}
