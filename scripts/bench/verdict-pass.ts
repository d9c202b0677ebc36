import { mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { dirname, join, resolve } from 'node:path';
import { assess } from '../../src/lib/assessment/assess';
import { chainUncertainty } from '../../src/lib/assessment/uncertainty-statement';
import { parseLimitFile } from '../../src/lib/limits/parse-limit-file';
import { DEFAULT_PHASE_NAMES } from '../../src/lib/recording/phase';
import type { WindowPool } from '../../src/lib/server/analysis/pool/window-pool';
import { prepareWaveform } from '../../src/lib/server/analysis/prepare-analysis';
import { decodeSeries } from '../../src/lib/server/analysis/series-codec';
import { createDiskBlobStore } from '../../src/lib/server/storage/disk-blob-store';
import { mappingsOf, NOMINAL_VOLTAGES_V, openOnDisk, START_MS } from './capture-on-disk';

const LIMITS = resolve('seeds/limits');
const POINT = {
	kind: 'pcc',
	system: 'four-wire',
	nominalVoltage_V: 400,
	nominalFrequency_Hz: 50,
	demandCurrent_A: 160,
	shortCircuitCurrent_A: 6000
} as const;

export interface VerdictFigures {
	/** From the opening of the complete file. */
	analysed_s: number;
	verdict_s: number;
	verdicts: Record<string, string>;
}

/**
 * What the worker does from the last byte to a verdict, with its own functions: opens the files, analyses them in
 * threads, encodes what the database would get, stores the samples for the waveform view, judges the intervals. The
 * database itself and the queue's interval of polling are left out.
 */
export async function verdictPass(
	files: { cfg: string; dat: string },
	windowPool: WindowPool
): Promise<VerdictFigures> {
	const folder = mkdtempSync(join(dirname(files.dat), 'blobs-'));
	const sets = readdirSync(LIMITS).filter((name) => /^(ieee-519-2022|en-50160-2022)\.json$/.test(name));
	const begin = performance.now();
	const since = () => (performance.now() - begin) / 1000;
	const { source, close } = openOnDisk(files);
	const stored: unknown[] = [];
	const prepared = await prepareWaveform(
		{ blobs: createDiskBlobStore(folder), windowPool },
		source,
		mappingsOf(source),
		{
			start_ms: START_MS,
			nominalFrequency_Hz: 50,
			nominalVoltages_V: NOMINAL_VOLTAGES_V,
			phaseNames: DEFAULT_PHASE_NAMES
		},
		{ progress: async () => undefined },
		async (part) => void stored.push(part)
	).finally(close);
	const analysed_s = since();
	const series = prepared.last.series
		.filter((row): row is typeof row & { interval: '3s' | '10min' } => ['3s', '10min'].includes(row.interval))
		.map(decodeSeries);
	const uncertainty = chainUncertainty({
		nominalFrequency_Hz: 50,
		instrumentClass: 'I',
		certificate: [],
		voltageTransducers: [],
		currentTransducers: [],
		currentRange_A: null,
		resolution: null
	});
	const verdicts = sets.map((name) => {
		const parsed = parseLimitFile(name, JSON.parse(readFileSync(join(LIMITS, name), 'utf8')));
		if (!parsed.ok) throw new Error(parsed.problem.sentence);
		const { limitSet } = parsed.value;
		const { limitSetTitle, verdict } = assess({
			point: POINT,
			limitSet,
			series,
			siteTimeZone: 'Europe/Berlin',
			uncertainty,
			decisionRule: 'guarded'
		});
		return [limitSetTitle, verdict] as const;
	});
	const verdict_s = since();
	rmSync(folder, { recursive: true });
	return { analysed_s, verdict_s, verdicts: Object.fromEntries(verdicts) };
}
