import { readdirSync, readFileSync } from 'node:fs';
import type { JudgedPoint } from '../../src/lib/analysis-document/analysis-request';
import { assessmentEntry, type ChosenLimits } from '../../src/lib/analysis-document/assessment-entry';
import type { PointFile } from '../../src/lib/analysis-document/point-file';
import { applicableSets } from '../../src/lib/limits/applicable-sets';
import { limitSetByName } from '../../src/lib/limits/limit-set-name';
import type { LimitSet } from '../../src/lib/limits/limit-set';
import { parseLimitFile } from '../../src/lib/limits/parse-limit-file';
import { countryOfTimeZone } from '../../src/lib/register/time-zones';
import { err, ok, type Result } from '../../src/lib/result';

const LIMIT_FILES = new URL('../../seeds/limits/', import.meta.url);

function publishedLimitSets(): LimitSet[] {
	const names = readdirSync(LIMIT_FILES).filter((name) => name.endsWith('.json'));
	return names.sort().map((name) => {
		const data: unknown = JSON.parse(readFileSync(new URL(name, LIMIT_FILES), 'utf8'));
		const parsed = parseLimitFile(name.replace(/\.json$/, ''), data);
		if (!parsed.ok) throw new Error(parsed.problem.sentence);
		return parsed.value.limitSet;
	});
}

/**
 * Chooses the limit set of a point: the one named on the command line, else the one in the point file, else the one that
 * the register would suggest.
 * timeZone  of the site; its country tells which standard is usual
 */
export function judgedPoint(
	facts: PointFile,
	named: string | null,
	nominalFrequency_Hz: 50 | 60 | null,
	timeZone: string
): Result<JudgedPoint, string> {
	const sets = publishedLimitSets();
	const name = named ?? facts.limitSet;
	if (name !== null) {
		const found = limitSetByName(name, sets);
		if (!found.ok) return found;
		const limitSet = found.value;
		const unknown = (facts.tables ?? []).filter((key) => !limitSet.tables.some((table) => table.key === key));
		if (unknown.length > 0)
			return err(
				`${limitSet.standard} ${limitSet.edition} has no table “${unknown[0]}”; its tables are ${limitSet.tables.map((table) => table.key).join(', ')}.`
			);
		return ok(
			judgedBy(facts, {
				limitSet,
				reason: `Named ${named === null ? 'in the point file' : 'on the command line'}.`
			})
		);
	}
	if (facts.tables !== null)
		return err(
			'The point file chooses tables but no limit set; add "limitSet" or name one with --limit-set.'
		);
	if (nominalFrequency_Hz === null)
		return err(
			'Without a limit set its choice needs the frequency; name one with --limit-set, or add "nominalFrequency_Hz" to the point file.'
		);
	const question = {
		kind: facts.kind ?? 'pcc',
		nominalFrequency_Hz,
		nominalVoltage_V: facts.nominalVoltage_V,
		country: countryOfTimeZone(timeZone)
	};
	const best = applicableSets(question, sets)[0];
	return best
		? ok(judgedBy(facts, best))
		: err('No published limit set suits this point by itself; name one with --limit-set.');
}

function judgedBy(facts: PointFile, limits: ChosenLimits): JudgedPoint {
	return { facts, judge: (measured, series) => assessmentEntry(facts, limits, measured, series) };
}
