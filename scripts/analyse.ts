/** Prints the analysis of one capture as JSON; see docs/analyse.md. */
import { analysisDocument } from '../src/lib/analysis-document/build-document';
import type { AnalysisDocument } from '../src/lib/analysis-document/document-schema';
import { openCapture } from '../src/lib/recording/read-capture';
import { err, ok, type Result } from '../src/lib/result';
import { captureFiles, openFiles, sha256Of } from './analyse/capture-files';
import { readCommandLine, USAGE, type CommandLine } from './analyse/command-line';
import { readPointFile } from './analyse/read-point-file';

const BAD_INPUT = 2;
const OUR_MISTAKE = 1;

async function analyse(asked: CommandLine): Promise<Result<AnalysisDocument, string>> {
	const paths = captureFiles(asked.files);
	if (!paths.ok) return paths;
	const facts = asked.pointPath === null ? null : readPointFile(asked.pointPath);
	if (facts && !facts.ok) return facts;
	const point = facts?.value ?? null;
	const stated_Hz = asked.nominalFrequency_Hz;
	if (stated_Hz && point?.nominalFrequency_Hz && point.nominalFrequency_Hz !== stated_Hz)
		return err(
			`The point file states ${point.nominalFrequency_Hz} Hz and --nominal-frequency ${stated_Hz} Hz; correct one of them.`
		);
	const timeZone = asked.timeZone ?? point?.timeZone ?? 'UTC';
	const handles = openFiles(paths.value);
	try {
		const opened = openCapture(
			handles,
			asked.samplingRate_Hz === null ? {} : { samplingRate_Hz: asked.samplingRate_Hz }
		);
		if (!opened.ok) return err(opened.problem.sentence);
		const content = opened.value;
		const nominal_Hz =
			stated_Hz ?? point?.nominalFrequency_Hz ?? frequencyOfFile(content.nominalFrequency_Hz);
		// Limit tables bring a parser of formulas along, which takes seconds to load.
		const limits = point && (await import('./analyse/judged-point'));
		const judged = point && limits && limits.judgedPoint(point, asked.limitSetName, nominal_Hz, timeZone);
		if (judged && !judged.ok) return judged;
		return analysisDocument({
			content,
			files: handles.map((handle) => ({ name: handle.name, sha256: sha256Of(handle) })),
			nominalFrequency_Hz: stated_Hz,
			timeZone,
			start: asked.start,
			judged: judged?.value ?? null
		});
	} finally {
		for (const handle of handles) handle.close();
	}
}

function frequencyOfFile(stated_Hz: number | null): 50 | 60 | null {
	return stated_Hz === 50 || stated_Hz === 60 ? stated_Hz : null;
}

async function run(): Promise<Result<string, string>> {
	const asked = readCommandLine(process.argv.slice(2));
	if (!asked.ok) return asked;
	if (asked.value === 'help') return ok(USAGE);
	const document = await analyse(asked.value);
	return document.ok ? ok(`${JSON.stringify(document.value, null, '\t')}\n`) : document;
}

function fail(sentence: string, code: number): void {
	process.stderr.write(`${sentence.replace(/\s+/g, ' ').trim()}\n`);
	process.exitCode = code;
}

// Whoever reads the document may have seen enough of it, as `head` does.
process.stdout.on('error', (cause: NodeJS.ErrnoException) => {
	if (cause.code !== 'EPIPE') throw cause;
});

try {
	const outcome = await run();
	if (outcome.ok) process.stdout.write(outcome.value);
	else fail(outcome.problem, BAD_INPUT);
} catch (cause) {
	const { code, message } = cause as NodeJS.ErrnoException;
	if (code === 'EACCES' || code === 'EPERM')
		fail(`A file cannot be read (${message}); give yourself the right to.`, BAD_INPUT);
	else fail(`The analysis failed on our side (${message}); report it with the files.`, OUR_MISTAKE);
}
