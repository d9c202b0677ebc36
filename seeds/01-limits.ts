import type { Knex } from 'knex';
import { parseLimitFile } from '../src/lib/limits/parse-limit-file';
import { storePublishedLimitSet } from '../src/lib/server/repositories/published-limit-sets';
import absHarmonicsGuidance2006 from './limits/abs-harmonics-guidance-2006.json';
import en501602010 from './limits/en-50160-2010.json';
import en501602022 from './limits/en-50160-2022.json';
import enaErG5412005 from './limits/ena-er-g5-4-1-2005.json';
import enaErecG5Issue52020 from './limits/ena-erec-g5-issue-5-2020.json';
import gbt145491993 from './limits/gbt-14549-1993.json';
import iacsUrE242018 from './limits/iacs-ur-e24-2018.json';
import iec600921012018 from './limits/iec-60092-101-2018.json';
import iec610002122003 from './limits/iec-61000-2-12-2003.json';
import iec61000222002 from './limits/iec-61000-2-2-2002.json';
import iec61000242002 from './limits/iec-61000-2-4-2002.json';
import iecTr61000362008 from './limits/iec-tr-61000-3-6-2008.json';
import ieee5191992 from './limits/ieee-519-1992.json';
import ieee5192014 from './limits/ieee-519-2014.json';
import ieee5192022 from './limits/ieee-519-2022.json';
import milStd1399300b2008 from './limits/mil-std-1399-300b-2008.json';

/** One data file per standard edition, by key. Imported rather than read, so that the built server carries them. */
const FILES: Record<string, unknown> = {
	'abs-harmonics-guidance-2006': absHarmonicsGuidance2006,
	'en-50160-2010': en501602010,
	'en-50160-2022': en501602022,
	'ena-er-g5-4-1-2005': enaErG5412005,
	'ena-erec-g5-issue-5-2020': enaErecG5Issue52020,
	'gbt-14549-1993': gbt145491993,
	'iacs-ur-e24-2018': iacsUrE242018,
	'iec-60092-101-2018': iec600921012018,
	'iec-61000-2-12-2003': iec610002122003,
	'iec-61000-2-2-2002': iec61000222002,
	'iec-61000-2-4-2002': iec61000242002,
	'iec-tr-61000-3-6-2008': iecTr61000362008,
	'ieee-519-1992': ieee5191992,
	'ieee-519-2014': ieee5192014,
	'ieee-519-2022': ieee5192022,
	'mil-std-1399-300b-2008': milStd1399300b2008
};

/**
 * Published limit tables. Safe to run at every start: equal content is left alone, and a set that an assessment
 * rests on is never rewritten.
 */
export async function seed(knex: Knex): Promise<void> {
	for (const [key, data] of Object.entries(FILES)) {
		const parsed = parseLimitFile(key, data);
		if (!parsed.ok) throw new Error(parsed.problem.sentence);
		const outcome = await storePublishedLimitSet(knex, parsed.value.limitSet, new Date());
		if (outcome === 'kept-in-use') {
			process.emitWarning(
				`The limit set ${key} differs from its data file but assessments rest on it; it was left as it is.`
			);
		}
	}
}
