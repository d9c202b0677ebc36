import { z } from 'zod';
import { demandSchema, phaseNamesSchema, shortCircuitSchema } from '../register/point-facts';
import { isTimeZone } from '../register/time-zones';
import { err, ok, type Result } from '../result';

const positive = z.number().positive();
const ratio = z.object({ primary: positive, secondary: positive });

/** Facts of a point as a file states them. Absent or null: not known. */
const pointFileSchema = z.object({
	name: z.string().nullish(),
	kind: z.enum(['pcc', 'in-plant']).nullish(),
	system: z.enum(['single-phase', 'split-phase', 'three-wire', 'four-wire']).nullish(),
	nominalVoltage_V: positive,
	nominalFrequency_Hz: z.union([z.literal(50), z.literal(60)]).nullish(),
	demandCurrent_A: positive.nullish(),
	demand: demandSchema.nullish(),
	shortCircuitCurrent_A: positive.nullish(),
	shortCircuit: shortCircuitSchema.nullish(),
	phaseNames: phaseNamesSchema.nullish(),
	voltageTransformer: ratio.nullish(),
	currentTransformer: ratio.nullish(),
	timeZone: z.string().refine(isTimeZone).nullish(),
	limitSet: z.string().min(1).nullish(),
	tables: z.array(z.string()).min(1).nullish(),
	decisionRule: z.enum(['guarded', 'simple']).nullish(),
	instrumentClass: z.enum(['I', 'II']).nullish(),
	voltageSensorError_pct: positive.nullish(),
	currentSensorError_pct: positive.nullish()
});
type PointFileFacts = z.infer<typeof pointFileSchema>;

/** Facts of a point, every one of them stated or null. */
export type PointFile = { [Key in keyof PointFileFacts]-?: Exclude<PointFileFacts[Key], undefined> } & {
	/** Names in the file that mean nothing here; most often a slip of the pen. */
	unknownKeys: string[];
};

/** What is expected under each name, as an error says it. */
const EXPECTED: Record<keyof PointFileFacts, string> = {
	name: 'a text',
	kind: '"pcc" or "in-plant"',
	system: '"single-phase", "split-phase", "three-wire" or "four-wire"',
	nominalVoltage_V: 'a number of volts above 0, line-to-line for three-phase systems, else line-to-neutral',
	nominalFrequency_Hz: '50 or 60',
	demandCurrent_A: 'a number of amperes above 0, or null where it is not known',
	demand: 'an object with "method" and its figures, as docs/analyse.md shows',
	shortCircuitCurrent_A: 'a number of amperes above 0, or null where it is not known',
	shortCircuit: 'an object with "method" and its figures, as docs/analyse.md shows',
	phaseNames: 'an object with a text for each of L1, L2, L3 and N',
	voltageTransformer: 'an object with "primary" and "secondary" in volts, or null for a direct connection',
	currentTransformer: 'an object with "primary" and "secondary" in amperes, or null for a direct connection',
	timeZone: 'the name of a time zone such as "Europe/London"',
	limitSet: 'the name of a limit set such as "IEEE 519-2022"',
	tables: 'a list of keys of tables of the limit set',
	decisionRule: '"guarded" or "simple"',
	instrumentClass: '"I" or "II" (IEC 61000-4-7)',
	voltageSensorError_pct: 'a number of percent above 0, or null for a direct measurement',
	currentSensorError_pct: 'a number of percent above 0, or null for a direct measurement'
};

/** Facts stated in two ways at once. */
const EITHER_OR = [
	['demandCurrent_A', 'demand'],
	['shortCircuitCurrent_A', 'shortCircuit']
] as const;

/**
 * Reads the text of a point file.
 * name     as the person named it, for the sentence
 * returns  the facts, or a sentence that names the place and what is expected there
 */
export function parsePointFile(name: string, text: string): Result<PointFile, string> {
	let json: unknown;
	try {
		json = JSON.parse(text.replace(/^\uFEFF/, ''));
	} catch (cause) {
		return err(
			`${name} is not valid JSON (${(cause as Error).message}); correct it as docs/analyse.md shows.`
		);
	}
	if (typeof json !== 'object' || json === null || Array.isArray(json))
		return err(`${name} must hold one JSON object with the facts of the point, as docs/analyse.md shows.`);
	const parsed = pointFileSchema.safeParse(json);
	if (!parsed.success) return err(problemSentence(name, json, parsed.error));
	const facts = parsed.data;
	for (const [one, other] of EITHER_OR)
		if (hasValue(facts[one]) && hasValue(facts[other]))
			return err(`${name} states both "${one}" and "${other}"; leave one of them out.`);
	const known = Object.keys(EXPECTED) as (keyof PointFileFacts)[];
	const stated = Object.fromEntries(known.map((key) => [key, facts[key] ?? null])) as Omit<
		PointFile,
		'unknownKeys'
	>;
	return ok({ ...stated, unknownKeys: Object.keys(json).filter((key) => !known.some((one) => one === key)) });
}

function hasValue(value: unknown): boolean {
	return value !== null && value !== undefined;
}

function problemSentence(name: string, json: object, error: z.ZodError): string {
	const { path } = error.issues[0]!;
	const key = String(path[0]) as keyof PointFileFacts;
	const value = (json as Record<string, unknown>)[key];
	const place = path.length > 1 ? ` (at "${path.slice(1).join('.')}")` : '';
	if (value === undefined) return `${name} lacks "${key}"; add ${EXPECTED[key]}.`;
	const shown = JSON.stringify(value);
	return `${name}: "${key}" is ${shown.length > 60 ? `${shown.slice(0, 57)}…` : shown}${place}; ${EXPECTED[key]} was expected.`;
}
