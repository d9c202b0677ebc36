/**
 * npm run bench:intake -- [--size 1GB] [--write] [--json]
 *
 * The whole way of a large capture as its engineer goes it: the built product on a fresh data folder, a real browser, the
 * file chooser, the confirming of the channels, the readings. Prints the speed of the upload beside a plain copy of the
 * file, the stages as shares, and the most memory that web server and worker ever held. --write puts the table into
 * docs/scale.md.
 */
import { copyFileSync, existsSync, fsyncSync, mkdtempSync, openSync, closeSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { parseArgs } from 'node:util';
import type { Page } from 'playwright-core';
import { makeCapture, ROW_BYTES, SAMPLING_RATE_HZ, type CaptureOnDisk } from './bench/capture-on-disk';
import { launchChromium, signInAs } from './browser-person';
import { printIntake, writeIntake, type IntakeReport } from './bench-intake/intake-report';
import { startProduct } from './bench-intake/product-under-watch';
import { stageTimes } from './bench-intake/stage-times';
import { ENGINEER, surveyForUpload } from './bench-intake/survey-for-upload';
import { settledEnvironment } from './settled-environment';

const { values: options } = parseArgs({
	options: {
		size: { type: 'string', default: '1GB' },
		port: { type: 'string', default: '3921' },
		write: { type: 'boolean', default: false },
		json: { type: 'boolean', default: false }
	}
});
const [, number, unit] = /^([\d.]+)(MB|GB)$/.exec(options.size) ?? [];
if (number === undefined || !existsSync('build/index.js')) {
	console.error(
		number === undefined
			? 'Use --size 60MB or --size 1GB.'
			: 'There is no build yet. Run "npm run build" first.'
	);
	process.exit(2);
}
/** An hour at most is waited for: what takes longer has stopped. */
const PATIENCE_MS = 3_600_000;

const folder = mkdtempSync(join(tmpdir(), 'sinewright-intake-'));
try {
	const report = await measure((Number(number) * (unit === 'GB' ? 1e9 : 1e6)) / ROW_BYTES / SAMPLING_RATE_HZ);
	if (options.json) console.log(JSON.stringify(report));
	else printIntake(report);
	if (options.write) await writeIntake(report);
} finally {
	rmSync(folder, { recursive: true, force: true });
}

async function measure(duration_s: number): Promise<IntakeReport> {
	const capture = makeCapture(folder, duration_s);
	const copy_s = copiedIn_s(capture.dat);
	const dataDir = join(folder, 'data');
	const origin = `http://localhost:${options.port}`;
	const env = settledEnvironment({
		...process.env,
		SINEWRIGHT_MODE: 'demo',
		DATA_DIR: dataDir,
		HOST: 'localhost',
		PORT: options.port,
		ORIGIN: origin,
		LOG_LEVEL: 'error',
		NODE_ENV: 'production'
	});
	const surveyId = await surveyForUpload(env);
	const product = await startProduct(env, origin);
	try {
		const idle = product.peakMemory();
		const browser = await launchChromium();
		const context = await browser.newContext({ baseURL: origin, viewport: { width: 1440, height: 900 } });
		const page = await context.newPage();
		const clock = await throughTheBrowser(page, surveyId, capture);
		await browser.close();
		return {
			bytes: capture.bytes,
			duration_s: capture.duration_s,
			copy_s,
			stages_s: stageTimes(dataDir, clock.chosen_ms, clock.shown_ms),
			idle,
			peak: product.peakMemory(),
			endState: clock.endState
		};
	} finally {
		await product.stop();
	}
}

/** As a person does it. */
async function throughTheBrowser(page: Page, surveyId: string, { cfg, dat }: CaptureOnDisk) {
	page.setDefaultTimeout(PATIENCE_MS);
	await signInAs(page, ENGINEER.email, ENGINEER.password);
	await page.goto(`/surveys/${surveyId}/captures`);
	await page.waitForLoadState('networkidle');
	const chosen_ms = Date.now();
	await page.locator('input[type="file"]').first().setInputFiles([cfg, dat]);
	await page.getByRole('main').getByRole('link', { name: 'Confirm the channels' }).click();
	await page.getByRole('button', { name: 'Confirm and analyse' }).click();
	await page.getByRole('link', { name: 'See the readings' }).click();
	await page.waitForURL(/\/readings/);
	await page.locator('canvas, svg[aria-label], [role="img"]').first().waitFor();
	const shown_ms = Date.now();
	await page.goto(`/surveys/${surveyId}/captures`);
	const row = page.getByRole('row').filter({ hasText: 'bench' });
	const endState = (await row.first().innerText()).replace(/\s+/g, ' ').trim();
	return { chosen_ms, shown_ms, endState };
}

/** Seconds of a plain copy of the file, until it lies on the disk. */
function copiedIn_s(file: string): number {
	const begin = performance.now();
	const copy = join(folder, 'copy');
	copyFileSync(file, copy);
	const handle = openSync(copy, 'r+');
	fsyncSync(handle);
	closeSync(handle);
	const seconds = (performance.now() - begin) / 1000;
	rmSync(copy);
	return seconds;
}
