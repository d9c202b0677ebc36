/** A process of its own for the analysis under measurement, compiled by bench.ts: answers every line on stdin with one line of JSON. */
import { createInterface } from 'node:readline';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { createWindowPool } from '../../src/lib/server/analysis/pool/window-pool';
import { analysisPass } from './analysis-pass';
import { verdictPass } from './verdict-pass';

const [cfg, dat] = process.argv.slice(2) as [string, string];
const pool = createWindowPool(join(dirname(fileURLToPath(import.meta.url)), 'window-thread.js'));
process.stdout.write('ready\n');
const reply = (value: unknown) => process.stdout.write(`${JSON.stringify(value)}\n`);

for await (const line of createInterface({ input: process.stdin })) {
	if (line === 'pass') reply(await analysisPass({ cfg, dat }, pool));
	if (line === 'verdict') reply(await verdictPass({ cfg, dat }, pool));
	// Of the whole process, threads included.
	if (line === 'memory') reply({ peak_MB: process.resourceUsage().maxRSS / 1024 });
}
await pool.close();
