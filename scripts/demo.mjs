// One command from a fresh clone to the running demo.
import { spawn } from 'node:child_process';
import { ensureBuild, ensurePackages, requireNode } from './ensure-installed.mjs';

requireNode();
ensurePackages();
ensureBuild();
const child = spawn(process.execPath, ['--import', 'tsx', 'scripts/demo.ts', ...process.argv.slice(2)], {
	stdio: 'inherit'
});
for (const signal of ['SIGTERM', 'SIGINT']) process.on(signal, () => child.kill(signal));
child.once('exit', (code, signal) => process.exit(signal ? 1 : (code ?? 0)));
