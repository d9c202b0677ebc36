import { existsSync, readFileSync } from 'node:fs';
import { basename, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import type { CaptureFile } from '$lib/recording/recording';

/** Recordings of other makers, kept beside the repository and never inside it. */
export const samplesFolder = fileURLToPath(new URL('../../../shared/samples/', import.meta.url));

export const samplesArePresent = existsSync(join(samplesFolder, 'expected.json'));

/** Said in the title of every suite that is skipped without the folder. */
export const skipReason = samplesArePresent ? '' : ' (skipped: no ../shared/samples beside the repository)';

export interface ExpectedSamples {
	n: number;
	missing: number;
	mean: number;
	rms: number;
	min: number;
	max: number;
	first3: number[];
	last: number;
}

export interface ExpectedChannel {
	index?: number;
	name: string;
	phase?: string;
	unit: string;
	ps?: string;
	all_samples?: ExpectedSamples;
	windows?: { from_sample: number; to_sample: number; rms: number; dc: number; fs_hz: number }[];
}

export interface ExpectedColumn {
	n?: number;
	mean: number;
	min: number;
	max: number;
}

export interface ExpectedFile {
	format: string;
	revision?: number;
	data_type?: string;
	analog?: number;
	status?: number;
	status_channels_that_change?: number[] | null;
	status_ones_first_sample?: number | null;
	line_freq_in_header?: number;
	rates_in_header?: ([number, number] | string)[];
	samples?: number;
	rows?: number;
	fs_hz?: number;
	fs_source?: string;
	form?: string;
	frames?: number;
	f1_hz_per_10s?: number[];
	first_stamp?: string;
	step_s?: number;
	step_s_most_common?: number;
	channels?: ExpectedChannel[];
	columns?: Record<string, ExpectedColumn>;
	reader_notes?: string[];
	expected?: string;
}

/** What an independent reader (numpy) found in each file; the method is described in the file itself. */
export function expectedFiles(): Record<string, ExpectedFile> {
	if (!samplesArePresent) return {};
	const text = readFileSync(join(samplesFolder, 'expected.json'), 'utf8');
	return (JSON.parse(text) as { files: Record<string, ExpectedFile> }).files;
}

/** A sample with the data file that belongs to it, where there is one. */
export function sampleCapture(path: string): CaptureFile[] {
	const names = path.endsWith('.cfg') ? [path, path.replace(/\.cfg$/, '.dat')] : [path];
	return names
		.filter((name) => existsSync(join(samplesFolder, name)))
		.map((name) => ({
			name: basename(name),
			bytes: new Uint8Array(readFileSync(join(samplesFolder, name)))
		}));
}
