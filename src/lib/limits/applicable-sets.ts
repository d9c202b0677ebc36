import type { LimitSet } from './limit-set';

/** What decides which published edition suits a point. */
export interface ApplicabilityQuestion {
	kind: 'pcc' | 'in-plant';
	nominalFrequency_Hz: 50 | 60;
	nominalVoltage_V: number;
	/** ISO 3166-1 alpha-2 code of the site; null when it is not known. */
	country: string | null;
	marine?: boolean;
}

export interface ApplicableSet {
	limitSet: LimitSet;
	/** `applies`: suggest it; `possible`: usual where a contract or utility names it; `historic`: superseded. */
	suitability: 'applies' | 'possible' | 'historic';
	/** Sentence for the point's form: why this set, or on what condition. */
	reason: string;
}

/** CENELEC members, where EN 50160 is the national standard (common practice; the list follows membership). */
const CENELEC_COUNTRIES = new Set(
	'AT BE BG CH CY CZ DE DK EE ES FI FR GR HR HU IE IS IT LT LU LV MK MT NL NO PL PT RO RS SE SI SK TR'.split(
		' '
	)
);

/** Countries whose utilities call up IEEE Std 519 as a rule (common practice). */
const IEEE_COUNTRIES = new Set('US CA MX PR PH SA TW KR CO EC PE VE PA GT CR DO HN NI SV'.split(' '));

interface Scope {
	/** Null when the edition does not suit the point at all. */
	judge: (question: ApplicabilityQuestion) => Omit<ApplicableSet, 'limitSet'> | null;
}

const contractOnly = (edition: string): Scope['judge'] => {
	const reason = `${edition} is superseded; use it only where a contract or a utility's rule names this edition.`;
	return (question) => (question.marine === true ? null : { suitability: 'historic', reason });
};

function judgeIeee519(question: ApplicabilityQuestion): Omit<ApplicableSet, 'limitSet'> | null {
	if (question.marine === true) return null;
	if (question.kind === 'in-plant') {
		return {
			suitability: 'possible',
			reason:
				'IEEE Std 519 binds at the point of common coupling; inside the plant its figures serve as a guide only.'
		};
	}
	if (question.country !== null && IEEE_COUNTRIES.has(question.country)) {
		return {
			suitability: 'applies',
			reason:
				'Utilities of this country call up IEEE Std 519 at the point of common coupling, for voltage and current.'
		};
	}
	if (question.country === null && question.nominalFrequency_Hz === 60) {
		return {
			suitability: 'applies',
			reason: 'At 60 Hz IEEE Std 519 is the usual requirement at the point of common coupling.'
		};
	}
	return {
		suitability: 'possible',
		reason:
			'IEEE Std 519 applies where the utility or a contract calls it up; it alone limits current at the point.'
	};
}

function judgeEn50160(question: ApplicabilityQuestion): Omit<ApplicableSet, 'limitSet'> | null {
	if (question.nominalFrequency_Hz !== 50 || question.marine === true) return null;
	if (question.kind === 'in-plant') return null;
	if (question.country !== null && CENELEC_COUNTRIES.has(question.country)) {
		return {
			suitability: 'applies',
			reason: 'EN 50160 describes the voltage at supply terminals of public networks in this country.'
		};
	}
	if (question.country === null) {
		return {
			suitability: 'applies',
			reason:
				'At 50 Hz EN 50160 describes the voltage of European public networks. Enter the country to be sure.'
		};
	}
	return {
		suitability: 'possible',
		reason: 'EN 50160 holds where the national rule or the supply contract adopts it.'
	};
}

function inCountry(code: string, reason: string): Scope['judge'] {
	return (question) => {
		if (question.marine === true || question.nominalFrequency_Hz !== 50) return null;
		return question.country === code ? { suitability: 'applies', reason } : null;
	};
}

function publicNetworkLevel(upToVoltage_V: number, aboveVoltage_V: number, name: string): Scope['judge'] {
	return (question) => {
		const fits = question.nominalVoltage_V > aboveVoltage_V && question.nominalVoltage_V <= upToVoltage_V;
		if (question.marine === true || question.kind === 'in-plant' || !fits) return null;
		return {
			suitability: 'possible',
			reason: `${name} gives levels for co-ordinating a public network; it is not a limit for one customer.`
		};
	};
}

function judgeIndustrial(question: ApplicabilityQuestion): Omit<ApplicableSet, 'limitSet'> | null {
	if (question.marine === true || question.kind !== 'in-plant') return null;
	if (question.nominalVoltage_V > 35_000) return null;
	return {
		suitability: 'applies',
		reason:
			'Compatibility levels for industrial networks are meant for points inside a plant. Choose the class with the owner.'
	};
}

function marine(name: string): Scope['judge'] {
	return (question) =>
		question.marine === true
			? { suitability: 'possible', reason: `${name} serves ships and offshore units of its own register.` }
			: null;
}

/** One scope for each published edition, by its key. A set that is not listed is a practice's own. */
const SCOPES: Record<string, Scope['judge']> = {
	'ieee-519-2022': judgeIeee519,
	'ieee-519-2014': contractOnly('IEEE Std 519-2014'),
	'ieee-519-1992': contractOnly('IEEE Std 519-1992'),
	'en-50160-2022': judgeEn50160,
	'en-50160-2010': contractOnly('EN 50160:2010'),
	'ena-erec-g5-issue-5-2020': inCountry(
		'GB',
		'EREC G5 Issue 5 sets planning levels for networks of Great Britain.'
	),
	'ena-er-g5-4-1-2005': contractOnly('ER G5/4-1'),
	'gbt-14549-1993': inCountry('CN', 'GB/T 14549 limits harmonics in public networks of China.'),
	'iec-61000-2-2-2002': publicNetworkLevel(1_000, 0, 'IEC 61000-2-2'),
	'iec-61000-2-12-2003': publicNetworkLevel(35_000, 1_000, 'IEC 61000-2-12'),
	'iec-tr-61000-3-6-2008': publicNetworkLevel(Infinity, 1_000, 'IEC/TR 61000-3-6'),
	'iec-61000-2-4-2002': judgeIndustrial,
	'iacs-ur-e24-2018': marine('IACS UR E24'),
	'iec-60092-101-2018': marine('IEC 60092-101'),
	'abs-harmonics-guidance-2006': marine('The ABS guidance'),
	'mil-std-1399-300b-2008': marine('MIL-STD-1399 Section 300')
};

const RANK: Record<ApplicableSet['suitability'], number> = { applies: 0, possible: 1, historic: 2 };

/**
 * Limit sets that suit a point, best first, each with the reason. A practice's own sets (a utility's contract)
 * come before published ones of the same suitability: whoever typed one in meant it to be used.
 */
export function applicableSets(question: ApplicabilityQuestion, limitSets: LimitSet[]): ApplicableSet[] {
	const found = limitSets.flatMap((limitSet): ApplicableSet[] => {
		if (limitSet.practiceId !== null) {
			const reason = 'A limit set of your own practice: use it where its contract covers this point.';
			return [{ limitSet, suitability: 'possible', reason }];
		}
		const suits = SCOPES[limitSet.key]?.(question) ?? null;
		return suits === null ? [] : [{ limitSet, ...suits }];
	});
	const own = (set: ApplicableSet) => (set.limitSet.practiceId === null ? 1 : 0);
	return found.sort(
		(a, b) =>
			RANK[a.suitability] - RANK[b.suitability] ||
			own(a) - own(b) ||
			Object.keys(SCOPES).indexOf(a.limitSet.key) - Object.keys(SCOPES).indexOf(b.limitSet.key)
	);
}
