import { readdirSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { handleOf } from '$lib/recording/capture-handle';
import { loadSamples } from '$lib/recording/load-samples';
import { memoryScratch } from '$lib/recording/memory-scratch';
import { openCapture } from '$lib/recording/read-capture';
import { readComtrade } from '$lib/recording/readers/comtrade/read-comtrade';
import type { Recording, RecordingChannel } from '$lib/recording/recording';
import { expectSamples } from './expect-samples';
import {
	expectedFiles,
	sampleCapture,
	samplesFolder,
	samplesArePresent,
	skipReason,
	type ExpectedFile
} from './sample-files';

// Source of every expected figure: ../shared/samples/expected.json, made by an independent numpy reader.

const all = expectedFiles();
const wellFormed = Object.entries(all).filter(([, file]) => file.format === 'COMTRADE');

const READ_WITH_REMARK: [string, number, string][] = [
	['cr_only.cfg', 40, 'status-changed'],
	['utf8_bom.cfg', 40, 'byte-order-mark'],
	['utf16le.cfg', 40, 'text-encoding'],
	['binary_cut_mid_record.cfg', 5000, 'dat-truncated'],
	['count_too_high.cfg', 8000, 'sample-count-mismatch'],
	['channel_total_wrong.cfg', 8000, 'channel-total-mismatch'],
	['says_binary_is_ascii.cfg', 8000, 'dat-is-text'],
	['impossible_date.cfg', 8000, 'date-unreadable'],
	['odd_section_markers.cff', 1000, 'cff-odd-section-line']
];

const REFUSED: [string, string, string][] = [
	['no_dat.cfg', 'dat-missing', 'no_dat.dat'],
	['no_rate_no_stamps.cfg', 'no-rate-and-no-stamps', 'no_rate_no_stamps.cfg, line 10'],
	['empty.cfg', 'file-empty', 'empty.cfg is empty']
];

function read(path: string): Recording {
	const result = readComtrade(sampleCapture(path));
	if (!result.ok) throw new Error(result.problem.sentence);
	return result.value;
}

function codes(recording: Recording): string[] {
	return recording.remarks.map(({ code }) => code);
}

const SIDES: Record<string, RecordingChannel['valuesAre']> = { P: 'primary', S: 'secondary', '': 'unknown' };

function expectHeader(recording: Recording, file: ExpectedFile): void {
	expect(recording.variant).toBe(`${file.revision} ${file.data_type}`);
	expect(recording.sampleCount).toBe(file.samples);
	expect(recording.channels.length).toBe(file.analog);
	expect(recording.statusChannelNames.length).toBe(file.status);
	expect(recording.nominalFrequency_Hz ?? 0).toBe(file.line_freq_in_header);
}

describe.skipIf(!samplesArePresent)(`COMTRADE captures of other makers${skipReason}`, () => {
	it('finds all 28 well-formed ones', () => {
		expect(wellFormed.length).toBe(28);
	});

	it('leaves out no COMTRADE capture of the folder, and no damaged one', () => {
		const damaged = Object.keys(all).filter((path) => path.startsWith('derived/malformed/'));
		const elsewhere = ['derived/malformed/empty.csv'];
		expect(damaged.map((path) => path.replace('derived/malformed/', '')).sort()).toEqual(
			[...READ_WITH_REMARK.map(([name]) => name), ...REFUSED.map(([name]) => name), 'bad_values_ascii.cfg']
				.concat(elsewhere.map((path) => path.replace('derived/malformed/', '')))
				.sort()
		);
		const inFolder = ['comtrade', 'derived/comtrade', 'derived/malformed'].flatMap((folder) =>
			readdirSync(join(samplesFolder, folder))
				.filter((name) => /\.(cfg|cff)$/.test(name))
				.map((name) => `${folder}/${name}`)
		);
		// With the same header as small_ascii_2013, told apart only by its data file: none is without figures.
		expect(inFolder.filter((path) => !(path in all))).toEqual([]);
	});

	it.each(wellFormed)(
		'%s: status channels and the start are as an independent reader found them',
		(path, file) => {
			const recording = read(path);
			const activity = recording.statusActivity ?? [];
			expect(activity.length).toBe(file.status);
			if (file.status_channels_that_change)
				expect(activity.flatMap(({ changeCount }, index) => (changeCount > 0 ? [index + 1] : []))).toEqual(
					file.status_channels_that_change
				);
			if (file.status_ones_first_sample !== undefined && file.status_ones_first_sample !== null)
				expect(activity.filter(({ startsAs }) => startsAs === 1).length).toBe(file.status_ones_first_sample);
			const [, one, two, year, time] = /^(\d+)\/(\d+)\/(\d+),(.*)$/.exec(file.first_stamp ?? '') ?? [];
			// One 1991 capture writes the day first all the same, and the reader says so.
			const monthFirst = recording.variant.startsWith('1991') && !codes(recording).includes('date-order');
			const [month, day] = monthFirst ? [one, two] : [two, one];
			const fullYear = year?.length === 2 ? `20${year}` : year;
			expect(recording.start?.local).toBe(`${fullYear}-${month}-${day}T${time}`);
		}
	);

	it.each(wellFormed)('%s gives the very samples when it is read piece by piece', (path) => {
		const opened = openCapture(sampleCapture(path).map(handleOf), { scratch: memoryScratch() });
		if (!opened.ok || opened.value.kind !== 'waveform') throw new Error('not read');
		expect(loadSamples(opened.value)).toEqual(read(path));
	});

	it.each(wellFormed)('%s is read with the expected figures', (path, file) => {
		const recording = read(path);
		expectHeader(recording, file);
		for (const [index, channel] of (file.channels ?? []).entries()) {
			const ours = recording.channels[index] as RecordingChannel;
			expect(ours.name).toBe(channel.name);
			expect(ours.unitAsWritten).toBe(channel.unit);
			expect(ours.valuesAre).toBe(SIDES[(channel.ps ?? '').toUpperCase()]);
			if (channel.all_samples) expectSamples(ours, channel.unit, channel.all_samples);
		}
	});

	it.each(wellFormed)('%s has segments that cover every sample at the stated rates', (path, file) => {
		const recording = read(path);
		if (recording.timeStamps_s) {
			expect(recording.timeStamps_s.length).toBe(recording.sampleCount);
			expect(recording.segments).toEqual([]);
			return;
		}
		let next = 0;
		for (const segment of recording.segments) {
			expect(segment.fromSample).toBe(next);
			expect(segment.toSample).toBeGreaterThan(next);
			next = segment.toSample;
		}
		expect(next).toBe(recording.sampleCount);
		for (const [index, rate] of (file.rates_in_header ?? []).entries()) {
			if (typeof rate === 'string' || rate[0] === 0) continue;
			expect(recording.segments[index]?.samplingRate_Hz).toBe(rate[0]);
			expect(recording.segments[index]?.toSample).toBe(rate[1]);
		}
	});
});

describe.skipIf(!samplesArePresent)(`what those captures are peculiar for${skipReason}`, () => {
	it('keeps kilovolts of a primary capture as volts, with ratio and side', () => {
		const voltage = read('comtrade/gen50_binary_1999.cfg').channels[3] as RecordingChannel;
		expect(voltage).toMatchObject({
			quantity: 'voltage',
			baseUnit: 'V',
			valuesAre: 'primary',
			phaseHint: 'L1'
		});
		expect(voltage.ratio).toEqual({ primary: 6, secondary: 0.1 });
		expect(voltage.range?.max).toBeCloseTo(0.0006787328 * 32767 * 1000, 9);
	});

	it('does not believe stamps that wrap after 65 536 µs', () => {
		expect(codes(read('comtrade/gen50_binary_1999.cfg'))).toContain('stamps-not-rising');
		expect(read('comtrade/gen50_binary_1999.cfg').segments.length).toBe(1);
	});

	it('keeps stretches apart where the stamps jump by up to 6.12 s', () => {
		const recording = read('comtrade/relay_segments_ascii_1991.cfg');
		expect(recording.segments.length).toBe(8);
		expect(codes(recording)).toContain('time-gap');
		const gaps = recording.segments.slice(1).map(({ gapBefore_s }) => gapBefore_s ?? NaN);
		expect(gaps[0]).toBeCloseTo((3_444_166 - 162_500) / 1e6 - 1 / 1200, 9);
		expect(Math.max(...gaps.filter(Number.isFinite))).toBeCloseTo(6.12 - 1 / 1200, 9);
		expect(recording.start).toEqual({ local: '2015-09-17T10:52:52.987545', utcOffset_min: null });
		expect(recording.channels[9]?.name).toBe('Ua对侧');
	});

	it('reads names in Windows-1251, code page 866, ISO 8859-1 and UTF-8', () => {
		expect(read('comtrade/varrate83_ascii_cp1251.cfg').recorderName).toBe('терминал версия 101110');
		expect(read('comtrade/relay_ascii_1991_cp866.cfg').stationName).toBe('ТЕРМИНАЛ-1');
		expect(read('comtrade/relay_ascii_1991_cp866.cfg').channels[1]?.name).toBe('Iв');
		expect(read('comtrade/small_ascii_latin1.cfg').stationName).toBe('Estação de Medição');
		expect(read('comtrade/small_ascii_utf8.cfg').stationName).toMatch(/[\uac00-\ud7a3]/);
	});

	it('keeps the stated 83 rates', () => {
		expect(read('comtrade/varrate83_ascii_cp1251.cfg').segments.length).toBe(83);
	});

	it('takes the UTC offset of a 2013 time code', () => {
		expect(read('comtrade/small_ascii_2013.cfg').start).toEqual({
			local: '2011-01-12T05:55:30.075011',
			utcOffset_min: -330
		});
	});

	it('ignores float limits that state no range, and a line frequency of 0', () => {
		expect(read('comtrade/sim_float32_2013.cfg').channels[0]?.range).toBeNull();
		expect(read('comtrade/small_float32_2013.cff').nominalFrequency_Hz).toBeNull();
		expect(codes(read('comtrade/small_float32_2013.cff'))).toContain('rate-and-stamps-disagree');
	});

	it('marks missing samples instead of counting them as 0 or as 11 389 A', () => {
		for (const path of ['comtrade/small_ascii_missing.cfg', 'comtrade/small_binary_missing.cfg'])
			expect(codes(read(path))).toContain('missing-samples');
	});

	it('reads the combined and the separate form to the same figures', () => {
		const separate = read('comtrade/small_ascii_2013.cfg');
		const combined = read('comtrade/small_ascii_2013.cff');
		expect(combined.channels.map(({ samples }) => [...samples])).toEqual(
			separate.channels.map(({ samples }) => [...samples])
		);
	});

	it('hands uneven stamps on and never makes a rate of them', () => {
		const recording = read('derived/comtrade/uneven_stamps_ascii_1999.cfg');
		expect(recording.segments).toEqual([]);
		expect(recording.timeStamps_s?.[1]).toBeCloseTo(20e-6, 12);
		expect(codes(recording)).toContain('uneven-time-stamps');
	});

	it('keeps two rates apart', () => {
		expect(read('derived/comtrade/two_rates_ascii_1999.cfg').segments).toEqual([
			{ samplingRate_Hz: 50000, fromSample: 0, toSample: 4000 },
			{ samplingRate_Hz: 12500, fromSample: 4000, toSample: 5000 }
		]);
	});
});

describe.skipIf(!samplesArePresent)(`damaged COMTRADE captures${skipReason}`, () => {
	const damaged = (name: string) => readComtrade(sampleCapture(`derived/malformed/${name}`));

	it.each(READ_WITH_REMARK)('%s is read in part or in full: %i samples, remark %s', (name, samples, code) => {
		const result = damaged(name);
		if (!result.ok) throw new Error(result.problem.sentence);
		expect(result.value.sampleCount).toBe(samples);
		expect(codes(result.value)).toContain(code);
		for (const remark of result.value.remarks) expect(remark.sentence).toContain(name.replace(/\.\w+$/, ''));
	});

	it('tells how much of a cut capture is missing', () => {
		const result = damaged('binary_cut_mid_record.cfg');
		if (!result.ok) throw new Error(result.problem.sentence);
		const sentences = result.value.remarks.map(({ sentence }) => sentence);
		expect(sentences).toContain(
			'binary_cut_mid_record.dat ends in the middle of a sample: 13 bytes after byte 100000 do not make up the 20 bytes of a sample and were left out.'
		);
		expect(sentences).toContain(
			'binary_cut_mid_record.dat holds 5000 samples, but binary_cut_mid_record.cfg, line 11 announces 8000; 3000 samples (37.5 %) are missing at the end.'
		);
	});

	it('has no start where the date is impossible', () => {
		const result = damaged('impossible_date.cfg');
		expect(result.ok && result.value.start).toBeNull();
	});

	it('reads damaged rows around the damage', () => {
		const result = damaged('bad_values_ascii.cfg');
		if (!result.ok) throw new Error(result.problem.sentence);
		const va = result.value.channels[0] as RecordingChannel;
		expect([101, 102, 103, 104].map((row) => va.samples[row - 1])).toEqual([NaN, NaN, NaN, NaN]);
		expect(va.samples[104]).toBeCloseTo(80937 * 0.1291914, 9);
		expect(result.value.channels[3]?.samples[300]).toBeNaN();
		const sentences = result.value.remarks.map(({ sentence }) => sentence).join(' ');
		expect(sentences).toContain('“NaN” on line 101');
		expect(sentences).toContain('line 201 has 9');
		expect(sentences).toContain('line 301 has 5');
	});

	it.each(REFUSED)('%s is refused: %s', (name, code, words) => {
		const result = damaged(name);
		expect(result.ok).toBe(false);
		if (result.ok) return;
		expect(result.problem.code).toBe(code);
		expect(result.problem.file).toBe(name);
		expect(result.problem.sentence).toContain(words);
	});
});
