import { createHash } from 'node:crypto';
import { basename } from 'node:path';
import { describe, expect, it } from 'vitest';
import { analysisDocument } from '$lib/analysis-document/build-document';
import { openCapture } from '$lib/recording/read-capture';
import { handleOf } from '$lib/recording/capture-handle';
import { expectedFiles, sampleCapture, samplesArePresent, skipReason } from './sample-files';

/** Steady over the whole file, so that its windows and those of expected.json (NumPy, single lines) see the same. */
const STEADY = [
	'comtrade/relay_ascii_1991_cp866.cfg',
	'derived/csv/semicolon_decimal_comma_bom.csv',
	'derived/csv/rounded_microseconds.csv',
	'derived/csv/tabs_milli_units_cr.csv'
];

interface ExpectedFigures {
	f1_hz: number;
	rms: number;
	h_pct: number[];
	thd40_pct?: number;
	thd50_pct?: number;
	err_pct_of_h1: number;
}

describe.skipIf(!samplesArePresent)(`analysis documents of real recordings${skipReason}`, () => {
	it.each(STEADY)('%s agrees with the figures of an independent program', (path) => {
		const files = sampleCapture(path);
		const opened = openCapture(files.map(handleOf));
		if (!opened.ok) throw new Error(opened.problem.sentence);
		const made = analysisDocument({
			content: opened.value,
			files: files.map(({ name, bytes }) => ({
				name,
				sha256: createHash('sha256').update(bytes).digest('hex')
			})),
			nominalFrequency_Hz: null,
			timeZone: 'UTC',
			start: null,
			judged: null
		});
		if (!made.ok) throw new Error(made.problem);
		expect(made.value.recording.files[0]!.name).toBe(basename(path));
		let compared = 0;
		for (const expected of expectedFiles()[path]!.channels!) {
			const [truth] = (expected.windows ?? []) as unknown as ExpectedFigures[];
			if (!truth) continue;
			const quantity = expected.unit.endsWith('V') ? 'voltage' : 'current';
			const channel = made.value.channels.find((one) =>
				path.endsWith('.cfg') ? one.name === expected.name : one.quantity === quantity
			)!;
			// Ten cycles let in √29 times the noise that the reference's 290 do, and its root mean square adds up: the relay has
			// a floor of 0.05 to 0.065 % at every order.
			const tolerance_pct = truth.err_pct_of_h1 + (path.endsWith('.cfg') ? 0.065 : 0.05);
			expect(Math.abs(channel.rms! / truth.rms - 1)).toBeLessThan(2e-3);
			expect(Math.abs(channel.frequency_Hz! - truth.f1_hz)).toBeLessThan(0.01);
			const shared = Math.min(channel.orders.length, truth.h_pct.length);
			for (let order = 1; order <= shared; order++) {
				const off = Math.abs(channel.orders[order - 1]!.percent! - truth.h_pct[order - 1]!);
				expect(off).toBeLessThan(tolerance_pct);
			}
			if (channel.thd40_percent !== null)
				expect(Math.abs(channel.thd40_percent - truth.thd40_pct!)).toBeLessThan(tolerance_pct);
			compared++;
		}
		expect(compared).toBeGreaterThan(1);
	});
});
