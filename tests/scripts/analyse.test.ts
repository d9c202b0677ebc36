import { spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { mkdirSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { parsePointFile } from '$lib/analysis-document/point-file';
import { analysisDocumentSchema, type AnalysisDocument } from '$lib/analysis-document/document-schema';
import { writeComtrade } from '$lib/synthesis/comtrade-writer';
import type { WaveformToWrite } from '$lib/synthesis/comtrade-writer-header';
import { synthesiseRecording } from '$lib/synthesis/waveform-recording';
import { threePhaseChannels } from '$lib/synthesis/waveform-three-phase';
import { captureFiles } from '../../scripts/analyse/capture-files';
import { readCommandLine } from '../../scripts/analyse/command-line';
import { judgedPoint } from '../../scripts/analyse/judged-point';

// The truth of the synthesised capture is the yardstick: closed-form sums of cosines, written and read back as files.
const TRUTH = {
	voltage_V: 230,
	voltageHarmonics: [
		{ order: 5, magnitude_pctOfFundamental: 3, phase_deg: 40 },
		{ order: 49, magnitude_pctOfFundamental: 0.4, phase_deg: -100 }
	],
	current_A: 80,
	currentHarmonics: [
		{ order: 5, magnitude_pctOfFundamental: 24, phase_deg: -170 },
		{ order: 7, magnitude_pctOfFundamental: 11, phase_deg: 15 }
	],
	lag_deg: 25
};
const POINT = {
	name: 'Incomer of a bakery',
	kind: 'pcc',
	system: 'four-wire',
	nominalVoltage_V: 400,
	nominalFrequency_Hz: 50,
	demandCurrent_A: 100,
	shortCircuitCurrent_A: 4500
};

let folder = '';
let throughNpm: ReturnType<typeof run>;
const inFolder = (name: string) => join(folder, name);

function write(files: { name: string; bytes: Uint8Array }[], rename: (name: string) => string = (n) => n) {
	for (const { name, bytes } of files) writeFileSync(inFolder(rename(name)), bytes);
}

function run(...args: string[]) {
	return runAs(process.execPath, '--import', 'tsx', 'scripts/analyse.ts', ...args);
}

function runAs(program: string, ...args: string[]) {
	const done = spawnSync(program, args, { encoding: 'utf8', maxBuffer: 1e8 });
	return { code: done.status, stdout: done.stdout, stderr: done.stderr };
}

function documentOf({ code, stdout, stderr }: ReturnType<typeof run>): AnalysisDocument {
	expect(stderr).toBe('');
	expect(code).toBe(0);
	return analysisDocumentSchema.parse(JSON.parse(stdout));
}

function expectRefusal({ code, stdout, stderr }: ReturnType<typeof run>, ...words: string[]) {
	expect(code).toBe(2);
	expect(stdout).toBe('');
	expect(stderr.trimEnd().split('\n')).toHaveLength(1);
	for (const word of words) expect(stderr).toContain(word);
}

beforeAll(() => {
	folder = mkdtempSync(join(tmpdir(), 'sinewright-analyse-'));
	const recording = synthesiseRecording(
		{
			frequency_Hz: 50.04,
			samplingRate_Hz: 12_800,
			duration_s: 4,
			seed: 7,
			channels: threePhaseChannels(TRUTH)
		},
		{ nominalFrequency_Hz: 50, start: { local: '2024-03-05T10:20:30.250000', utcOffset_min: 60 } }
	) as WaveformToWrite;
	const stem = 'feeder 7';
	write(
		writeComtrade(recording, { revision: '2013', dataFormat: 'FLOAT32', stem }),
		(name) => ({ 'feeder 7.cfg': 'Feeder 7.CFG', 'feeder 7.dat': 'FEEDER 7.Dat' })[name]!
	);
	mkdirSync(inFolder('alone'));
	write(writeComtrade(recording, { revision: '2013', dataFormat: 'FLOAT32', stem: 'alone/x' }).slice(0, 1));
	writeFileSync(inFolder('point.json'), JSON.stringify(POINT));
	throughNpm = runAs('npm', 'run', '--silent', 'analyse', '--', inFolder('Feeder 7.CFG'));
});

afterAll(() => rmSync(folder, { recursive: true, force: true }));

describe('the command line', () => {
	it('prints nothing but one document, from either name and through npm', () => {
		const document = documentOf(throughNpm);
		expect(run(inFolder('FEEDER 7.Dat')).stdout).toBe(throughNpm.stdout);
		const sha256 = (name: string) =>
			createHash('sha256')
				.update(readFileSync(inFolder(name)))
				.digest('hex');
		expect(document.recording).toMatchObject({
			format: 'COMTRADE',
			startTime: '2024-03-05T09:20:30.250Z',
			samplingRate_Hz: 12_800,
			duration_s: 4,
			files: [
				{ name: 'Feeder 7.CFG', sha256: sha256('Feeder 7.CFG') },
				{ name: 'FEEDER 7.Dat', sha256: sha256('FEEDER 7.Dat') }
			]
		});
		expect(document.intervals).toMatchObject({ window: 20, threeSecond: 1, tenMinute: 0, flagged: 0 });
		expect(document.assessment).toBeUndefined();
	});

	it('gives the figures of the truth', () => {
		const { channels, phaseReference } = documentOf(throughNpm);
		expect(channels.map(({ name, phase, unit }) => `${name} ${phase} ${unit}`)).toEqual([
			'U1 L1 V',
			'U2 L2 V',
			'U3 L3 V',
			'I1 L1 A',
			'I2 L2 A',
			'I3 L3 A'
		]);
		expect(phaseReference).toBe('U1');
		const turn_deg = { L1: 0, L2: -120, L3: 120 } as Record<string, number>;
		for (const channel of channels) {
			const isVoltage = channel.quantity === 'voltage';
			const fundamental = isVoltage ? TRUTH.voltage_V : TRUTH.current_A;
			const harmonics = isVoltage ? TRUTH.voltageHarmonics : TRUTH.currentHarmonics;
			const content = (toOrder: number) =>
				Math.hypot(...harmonics.filter((h) => h.order <= toOrder).map((h) => h.magnitude_pctOfFundamental));
			// FLOAT32 resolves 6e-8 of the reading; 1e-5 of the fundamental is the aim for synchronised windows.
			expect(channel.rms! / (fundamental * Math.hypot(1, content(50) / 100))).toBeCloseTo(1, 6);
			expect(channel.frequency_Hz).toBeCloseTo(50.04, 4);
			expect(channel.thd40_percent).toBeCloseTo(content(40), 3);
			expect(channel.thd50_percent).toBeCloseTo(content(50), 3);
			expect(channel.thdSubgroup_percent).toBeCloseTo(content(50), 3);
			expect(Math.abs(channel.dc!)).toBeLessThan(1e-4 * fundamental);
			expect(channel.orders.map(({ order }) => order)).toEqual(Array.from({ length: 50 }, (_, i) => i + 1));
			const own_deg = turn_deg[channel.phase!]! - (isVoltage ? 0 : TRUTH.lag_deg);
			for (const { order, magnitude_pctOfFundamental, phase_deg } of [
				{ order: 1, magnitude_pctOfFundamental: 100, phase_deg: 0 },
				...harmonics
			]) {
				const entry = channel.orders[order - 1]!;
				expect(entry.percent).toBeCloseTo(magnitude_pctOfFundamental, 3);
				expect(entry.magnitude).toBeCloseTo((fundamental * magnitude_pctOfFundamental) / 100, 2);
				expect(entry.subgroup! / entry.magnitude!).toBeCloseTo(1, 4);
				// The truth refers orders to the channel's own fundamental, the document to that of U1.
				const expected_deg = phase_deg + order * own_deg;
				const off_deg = (entry.phase_deg! - expected_deg) % 360;
				expect(Math.min(Math.abs(off_deg), 360 - Math.abs(off_deg))).toBeLessThan(order === 1 ? 0.01 : 0.1);
			}
		}
	});

	it('judges a point by the limit set named, in any usual spelling', () => {
		const args = [inFolder('Feeder 7.CFG'), '--point', inFolder('point.json'), '--limit-set'];
		const { assessment } = documentOf(run(...args, 'IEEE 519-2022'));
		expect(assessment!.limitSet.key).toBe('ieee-519-2022');
		expect(assessment!.evidence).toBe('snapshot');
		const fifth = assessment!.rows.find(
			(row) => row.quantity === 'current' && row.order === 5 && row.phase === 'L1'
		)!;
		// I_5 = 24 % of 80 A on I_L = 100 A; I_sc/I_L = 45: 7 % below order 11 (IEEE Std 519-2022, table 2, row 20 < 50).
		expect(fifth.value_percent).toBeCloseTo(19.2, 3);
		expect(fifth.limit_percent).toBe(7);
		expect(fifth.utilisation).toBeCloseTo(19.2 / 7, 3);
		expect(fifth.verdict).toBe('exceeds');
		expect(assessment!.verdict).toBe('exceeds');
	});

	it('refuses bad input with one line and code 2', () => {
		expectRefusal(run(inFolder('alone/x.cfg')), 'x.cfg', 'x.dat');
		expectRefusal(run('fixtures/captures/four-wire-1999-ascii.cfg'), 'Record at least half a second');
		expectRefusal(
			run(inFolder('Feeder 7.CFG'), '--point', inFolder('point.json'), '--limit-set', 'House rules'),
			'no limit set “House rules”',
			'IEEE Std 519 2022'
		);
	});
});

describe('what may be asked for', () => {
	const refused = (...args: string[]) => {
		const asked = readCommandLine(args);
		if (asked.ok) throw new Error(`${args.join(' ')} was accepted`);
		return asked.problem;
	};

	it('is told what is wrong with it', () => {
		expect(refused()).toContain('Name the file of a capture');
		expect(refused('a.cfg', '--nominal-frequency', '55')).toBe('--nominal-frequency is 50 or 60, not “55”.');
		expect(refused('a.cfg', '--limit-set', 'IEEE 519-2022')).toContain('add --point');
		expect(refused('a.cfg', '--colour', 'red')).toContain("'--colour'; --help lists");
		expect(refused('a.cfg', '--point')).toContain("'--point <value>' argument missing");
		expect(refused('a.cfg', '--time-zone', 'Mars')).toContain('“Mars”');
		expect(refused('a.cfg', '--start', '5 March')).toContain('“5 March”');
		expect(refused('a.csv', '--sampling-rate', '0')).toContain('“0”');
	});

	it('reads a start with and without its zone', () => {
		const startOf = (text: string) => {
			const asked = readCommandLine(['a.csv', '--start', text]);
			return asked.ok && asked.value !== 'help' ? asked.value.start : null;
		};
		const local = '2024-03-05T10:20:30.5';
		expect(startOf('2024-03-05 10:20:30.5')).toEqual({ local, utcOffset_min: null });
		expect(startOf(`${local}Z`)).toEqual({ local, utcOffset_min: 0 });
		expect(startOf(`${local}-03:30`)).toEqual({ local, utcOffset_min: -210 });
	});

	it('is one capture whose files exist', () => {
		const problem = (...names: string[]) => {
			const found = captureFiles(names.map(inFolder));
			return found.ok ? '' : found.problem;
		};
		expect(problem('nothing.cfg')).toContain('nothing.cfg does not exist');
		expect(problem('alone')).toContain('alone is no file');
		expect(problem('Feeder 7.CFG', 'alone/x.cfg')).toContain('belong to 2 captures');
		expect(problem('Feeder 7.CFG', 'Feeder 7.CFG')).toBe('');
		const found = captureFiles([inFolder('FEEDER 7.Dat')]);
		expect(found.ok && found.value).toEqual(['Feeder 7.CFG', 'FEEDER 7.Dat'].map(inFolder));
	});

	it('is judged by the limit set named, else by the one that suits the point', () => {
		const parsed = parsePointFile('p.json', JSON.stringify({ ...POINT, limitSet: 'EN 50160:2022' }));
		if (!parsed.ok) throw new Error(parsed.problem);
		const keyOf = (named: string | null, limitSet: string | null, zone: string) => {
			const judged = judgedPoint({ ...parsed.value, limitSet }, named, 50, zone);
			if (!judged.ok) return judged.problem;
			const measured = { system: 'four-wire', nominalFrequency_Hz: 50, timeZone: zone } as const;
			return judged.value.judge(measured, []).limitSet.key;
		};
		expect(keyOf('ieee 519 2014', 'EN 50160:2022', 'UTC')).toBe('ieee-519-2014');
		expect(keyOf(null, 'EN 50160:2022', 'UTC')).toBe('en-50160-2022');
		expect(keyOf(null, null, 'Europe/London')).toBe('ena-erec-g5-issue-5-2020');
		expect(keyOf(null, null, 'America/New_York')).toBe('ieee-519-2022');
		const tables = judgedPoint({ ...parsed.value, tables: ['table-99'] }, 'IEEE 519-2022', 50, 'UTC');
		expect(tables.ok || tables.problem).toMatch(/has no table “table-99”; its tables are table-1/);
	});
});
