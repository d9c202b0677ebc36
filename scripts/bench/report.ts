/** One program over all its counted passes; medians. */
export interface Contest {
	startUp_s: number;
	seconds: number;
	/** Of all threads. */
	cpu_s: number;
	timesRealTime: number;
	/** Greatest resident memory of the whole process. */
	peakMemory_MB: number;
	windowCount: number;
	/** First channel over the whole capture: both programs must read the same. */
	rms_V: number;
	fifth_pct: number;
}

export interface BenchReport {
	capture: { bytes: number; duration_s: number; channels: number; samplingRate_Hz: number };
	cores: number;
	repeats: number;
	analysis: Contest;
	/** Null where python3 has no numpy. */
	fixedWindow: Contest | null;
	/** Speed of the analysis over that of the fixed windows. */
	ratio: number | null;
	/** One thread, one pass. */
	stages: {
		seconds: number;
		shares_pct: Record<string, number>;
		functions: { name: string; share_pct: number }[];
	};
	verdict?: {
		bytes: number;
		/** The first of the process, which starts its threads and compiles its kernels. */
		first_s: number;
		analysed_s: number;
		verdict_s: number;
		verdicts: Record<string, string>;
	};
}

const line = (name: string, ...cells: string[]) =>
	console.log(name.padEnd(34) + cells.map((cell) => cell.padStart(16)).join(''));

export function printReport(report: BenchReport): void {
	const { capture, analysis, fixedWindow, stages, verdict } = report;
	console.log(
		`${capture.channels} channels at ${capture.samplingRate_Hz} S/s, ${capture.duration_s.toFixed(1)} s, ` +
			`${(capture.bytes / 1e6).toFixed(1)} MB; ${report.cores} cores; medians of ${report.repeats} passes in turns\n`
	);
	const both = (name: string, of: (contest: Contest) => string) =>
		line(name, of(analysis), fixedWindow ? of(fixedWindow) : '–');
	line('', 'analysis', 'NumPy, fixed');
	both('a pass, ms', ({ seconds }) => (1000 * seconds).toFixed(0));
	both('its processor time, ms', ({ cpu_s }) => (1000 * cpu_s).toFixed(0));
	both('multiple of real time', ({ timesRealTime }) => timesRealTime.toFixed(0));
	both('peak memory, MB', ({ peakMemory_MB }) => peakMemory_MB.toFixed(0));
	both('start-up, not counted, ms', ({ startUp_s }) => (1000 * startUp_s).toFixed(0));
	both('U1, V', ({ rms_V }) => rms_V.toFixed(3));
	both('U1, fifth order, %', ({ fifth_pct }) => fifth_pct.toFixed(4));
	if (report.ratio === null) console.log('\npython3 with numpy is not here: nothing to compare with');
	else console.log(`\nspeed ratio, analysis to fixed windows: ${report.ratio.toFixed(2)}`);
	console.log(`\nStages in one thread (${(1000 * stages.seconds).toFixed(0)} ms)`);
	for (const [stage, share] of Object.entries(stages.shares_pct)) line(stage, `${share.toFixed(1)} %`);
	if (stages.functions.length > 0) console.log('\nFunctions by time in themselves');
	for (const { name, share_pct } of stages.functions)
		console.log(`${share_pct.toFixed(1).padStart(6)} %  ${name}`);
	if (!verdict) return;
	console.log(`\nFrom the last byte of ${(verdict.bytes / 1e6).toFixed(0)} MB to the verdicts`);
	line('analysed and stored, s', verdict.analysed_s.toFixed(2));
	line('verdicts, s', verdict.verdict_s.toFixed(2));
	line('verdicts, first of a process, s', verdict.first_s.toFixed(2));
	for (const [title, outcome] of Object.entries(verdict.verdicts)) console.log(`  ${title}: ${outcome}`);
}
