import { execFile } from 'node:child_process';
import { join } from 'node:path';
import { promisify } from 'node:util';
import { describe, expect, it } from 'vitest';
import { analysisDocumentSchema, type AnalysisDocument } from '$lib/analysis-document/document-schema';
import {
	expectedFiles,
	samplesArePresent,
	samplesFolder,
	skipReason,
	type ExpectedChannel
} from '../reference/sample-files';

const runFile = promisify(execFile);

/** Figures of single lines over one stretch, by an independent program (NumPy; see “method” in expected.json). */
interface Truth {
	rms: number;
	f1_hz: number;
	h1_rms: number;
	h1_rms_half_diff_pct: number;
	h_pct: number[];
	err_pct_of_h1: number;
	thd40_pct?: number;
	thd50_pct?: number;
}
const expected = expectedFiles();
const truthOf = (path: string, position: number): Truth =>
	(expected[path]!.channels![position] as ExpectedChannel & { windows: Truth[] }).windows[0]!;

/** What the command prints about one sample; the text has to be the document and nothing else. */
async function printed(path: string): Promise<AnalysisDocument> {
	const { stdout, stderr } = await runFile(
		process.execPath,
		['--import', 'tsx', 'scripts/analyse.ts', join(samplesFolder, path)],
		{ maxBuffer: 1e8 }
	);
	expect(stderr).toBe('');
	return analysisDocumentSchema.parse(JSON.parse(stdout));
}

/**
 * Holds one channel to the reference. Steady recordings only: the command takes root mean squares of whole tens of cycles,
 * the reference one sum over a few cycles more, and the load drifts between its halves.
 */
function expectChannel(channel: AnalysisDocument['channels'][number], truth: Truth): void {
	const steady_pct = truth.h1_rms_half_diff_pct + 0.01;
	expect(100 * Math.abs(channel.rms! / truth.rms - 1), `${channel.name} rms`).toBeLessThan(steady_pct);
	expect(Math.abs(channel.frequency_Hz! - truth.f1_hz), `${channel.name} frequency`).toBeLessThan(0.001);
	if (truth.thd40_pct === undefined || truth.thd50_pct === undefined) return;
	const near_pct = truth.err_pct_of_h1 + 0.01;
	expect(Math.abs(channel.thd40_percent! - truth.thd40_pct), `${channel.name} THD`).toBeLessThan(near_pct);
	expect(Math.abs(channel.thd50_percent! - truth.thd50_pct), `${channel.name} THD`).toBeLessThan(near_pct);
	truth.h_pct.forEach((percent, index) =>
		expect(Math.abs(channel.orders[index]!.percent! - percent), `order ${index + 1}`).toBeLessThan(near_pct)
	);
}

describe.skipIf(!samplesArePresent)(`the command on recordings of live networks${skipReason}`, () => {
	it('one recording in three spellings gives the same figures, and those of the reference', async () => {
		const paths = ['semicolon_decimal_comma_bom', 'rounded_microseconds', 'tabs_milli_units_cr'].map(
			(name) => `derived/csv/${name}.csv`
		);
		const documents = await Promise.all(paths.map(printed));
		const [first] = documents;
		documents.forEach((document, at) => {
			expect(document.channels.map(({ quantity, unit }) => [quantity, unit])).toEqual([
				['voltage', 'V'],
				['current', 'A']
			]);
			document.channels.forEach((channel, position) => {
				expectChannel(channel, truthOf(paths[at]!, position));
				const one = first!.channels[position]!;
				expect(Math.abs(channel.rms! / one.rms! - 1)).toBeLessThan(1e-6);
				expect(Math.abs(channel.thd50_percent! - one.thd50_percent!)).toBeLessThan(1e-4);
			});
		});
	}, 60_000);

	it('a relay record in an old code page, named by its data file', async () => {
		const document = await printed('comtrade/relay_ascii_1991_cp866.dat');
		expect(document.recording.files.map(({ name }) => name)).toEqual([
			'relay_ascii_1991_cp866.cfg',
			'relay_ascii_1991_cp866.dat'
		]);
		const lines = document.channels.filter(({ phase }) => phase !== 'N').slice(0, 3);
		expect(lines).toHaveLength(3);
		lines.forEach((channel, position) => {
			expectChannel(channel, truthOf('comtrade/relay_ascii_1991_cp866.cfg', position));
			// 1000 samples a second carry no order 40.
			expect(channel.thd40_percent).toBeNull();
		});
	}, 60_000);

	it('a configuration without its data file ends with one sentence and nothing on standard output', async () => {
		await expect(printed('derived/malformed/no_dat.cfg')).rejects.toMatchObject({
			code: 2,
			stdout: '',
			stderr: expect.stringMatching(/^[^\n]*no_dat\.dat[^\n]*\n$/)
		});
	}, 60_000);
});
