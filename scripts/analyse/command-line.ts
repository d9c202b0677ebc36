import { parseArgs } from 'node:util';
import { parseIsoLocal } from '../../src/lib/recording/calendar';
import type { RecordingStart } from '../../src/lib/recording/recording';
import { isTimeZone } from '../../src/lib/register/time-zones';
import { err, ok, type Result } from '../../src/lib/result';

export const USAGE = `npm run --silent analyse -- FILE… [options]

Prints one JSON document about one capture (COMTRADE or delimited text).

  --nominal-frequency 50|60    nominal frequency; told from the measurement without it
  --point point.json           facts of the point; adds the assessment
  --limit-set "IEEE 519-2022"  limits to judge by; chosen to suit the point without it
  --time-zone Europe/London    zone of the recorder's clock where the file tells none; UTC without it
  --start 2024-03-05T10:20:30  start of the capture where the file tells none or a wrong one
  --sampling-rate 12800        rate of a table of samples without any time, Hz

Keys, units and the point file are described in docs/analyse.md.
`;

export interface CommandLine {
	files: string[];
	nominalFrequency_Hz: 50 | 60 | null;
	pointPath: string | null;
	limitSetName: string | null;
	timeZone: string | null;
	start: RecordingStart | null;
	samplingRate_Hz: number | null;
}

const OPTIONS = {
	'nominal-frequency': { type: 'string' },
	point: { type: 'string' },
	'limit-set': { type: 'string' },
	'time-zone': { type: 'string' },
	start: { type: 'string' },
	'sampling-rate': { type: 'string' },
	help: { type: 'boolean' }
} as const;

/** What the person asked for; a problem is a sentence, "help" stands by itself. */
export function readCommandLine(args: readonly string[]): Result<CommandLine | 'help', string> {
	let parsed;
	try {
		parsed = parseArgs({ args: [...args], options: OPTIONS, allowPositionals: true });
	} catch (cause) {
		const [complaint] = (cause as Error).message.split(/[.\n]/);
		return err(`${complaint}; --help lists what can be given.`);
	}
	const { values, positionals: files } = parsed;
	if (values.help) return ok('help');
	if (files.length === 0)
		return err('Name the file of a capture: npm run --silent analyse -- FILE… (--help lists the options).');
	const frequency = values['nominal-frequency'];
	if (frequency !== undefined && frequency !== '50' && frequency !== '60')
		return err(`--nominal-frequency is 50 or 60, not “${frequency}”.`);
	const rate = values['sampling-rate'];
	if (rate !== undefined && !(Number(rate) > 0 && Number.isFinite(Number(rate))))
		return err(`--sampling-rate is a number of hertz above 0, not “${rate}”.`);
	const timeZone = values['time-zone'];
	if (timeZone !== undefined && !isTimeZone(timeZone))
		return err(`--time-zone is the name of a zone such as Europe/London, not “${timeZone}”.`);
	const start = values.start === undefined ? null : statedStart(values.start);
	if (values.start !== undefined && start === null)
		return err(
			`--start is a date and time such as 2024-03-05T10:20:30 or 2024-03-05T10:20:30Z, not “${values.start}”.`
		);
	if (values['limit-set'] !== undefined && values.point === undefined)
		return err('--limit-set needs the facts of a point to judge; add --point point.json.');
	return ok({
		files,
		nominalFrequency_Hz: frequency === undefined ? null : (Number(frequency) as 50 | 60),
		pointPath: values.point ?? null,
		limitSetName: values['limit-set'] ?? null,
		timeZone: timeZone ?? null,
		start,
		samplingRate_Hz: rate === undefined ? null : Number(rate)
	});
}

/** "2024-03-05T10:20:30.5", with "Z" or "+02:00" behind it where the zone is known; null for anything else. */
function statedStart(text: string): RecordingStart | null {
	const [, local, zone] = /^(.+?)(Z|[+-]\d{2}:\d{2})?$/.exec(text.trim().replace(' ', 'T')) ?? [];
	if (local === undefined || parseIsoLocal(local) === null) return null;
	if (zone === undefined) return { local, utcOffset_min: null };
	if (zone === 'Z') return { local, utcOffset_min: 0 };
	const minutes = 60 * Number(zone.slice(1, 3)) + Number(zone.slice(4));
	return { local, utcOffset_min: zone.startsWith('-') ? -minutes : minutes };
}
