import { writeFileSync } from 'node:fs';
import { availableParallelism } from 'node:os';
import { format, resolveConfig } from 'prettier';
import type { PeakMemory } from './product-under-watch';
import type { StageTimes } from './stage-times';

export interface IntakeReport {
	bytes: number;
	/** Of the capture. */
	duration_s: number;
	/** A plain copy of the data file on the same disk. */
	copy_s: number;
	stages_s: StageTimes;
	/** Before anybody signed in. */
	idle: PeakMemory;
	peak: PeakMemory;
	/** The capture's row in the list. */
	endState: string;
}

const WORDS: Record<keyof StageTimes, string> = {
	upload: 'upload, until stored and hashed',
	recognition: 'recognition',
	confirmation: 'confirmation of the channels',
	analysis: 'analysis and storing',
	verdict: 'verdict',
	readings: 'readings on the screen'
};

function lines({ bytes, copy_s, stages_s, idle, peak }: IntakeReport): [string, string][] {
	const whole_s = Object.values(stages_s).reduce((sum, seconds) => sum + seconds, 0);
	const megabytes = (value: number) => `${value.toFixed(0)} MB`;
	return [
		['upload ÷ plain copy of the file, time', (stages_s.upload / copy_s).toFixed(1)],
		['upload', `${(bytes / 1e6 / stages_s.upload).toFixed(0)} MB/s`],
		...Object.entries(stages_s).map(([stage, seconds]): [string, string] => [
			WORDS[stage as keyof StageTimes],
			`${((100 * seconds) / whole_s).toFixed(0)} %`
		]),
		['web server, most memory (idle)', `${megabytes(peak.web_MB)} (${megabytes(idle.web_MB)})`],
		['worker, most memory (idle)', `${megabytes(peak.worker_MB)} (${megabytes(idle.worker_MB)})`]
	];
}

const title = ({ bytes, duration_s }: IntakeReport) =>
	`${(bytes / 1e6).toFixed(0)} MB of binary COMTRADE, eight channels, ${(duration_s / 60).toFixed(0)} minutes; ${availableParallelism()} cores`;

export function printIntake(report: IntakeReport): void {
	console.log(`${title(report)}\n`);
	for (const [name, value] of lines(report)) console.log(name.padEnd(40) + value.padStart(20));
	const whole_s = Object.values(report.stages_s).reduce((sum, seconds) => sum + seconds, 0);
	console.log(`\n${whole_s.toFixed(1)} s in all; the capture: ${report.endState}`);
}

/** The table of docs/scale.md; ratios and shares, because seconds are those of one machine. */
export async function writeIntake(report: IntakeReport): Promise<void> {
	const path = 'docs/scale.md';
	const text = [
		'# From the browser to the readings',
		'',
		'Written by `npm run bench:intake -- --size 1GB --write`: the built product on a fresh data folder, a real browser, the file chooser.',
		'Memory is the most that was ever resident, threads and shared pages included (`VmHWM` of Linux).',
		'',
		`${title(report)}.`,
		'',
		'| | |',
		'| --- | --- |',
		...lines(report).map(([name, value]) => `| ${name} | ${value} |`),
		''
	].join('\n');
	writeFileSync(path, await format(text, { ...(await resolveConfig(path)), parser: 'markdown' }));
}
