import type { Evidence, Verdict } from '../assessment/assessment';
import { VERDICT_WORDS } from '../assessment/verdict-words';
import { formatDuration, formatOrdinal } from '../units/format';
import { SYSTEM_WORDS, type PointFacts } from './point-facts';
import type { PointGap } from './point-gaps';

/** What the tables say about a survey, as far as its stages show it. */
export interface SurveyProgress {
	surveyId: string;
	point: Pick<PointFacts, 'kind' | 'system'> & { gaps: PointGap[] };
	captures: {
		count: number;
		files: number;
		duration_s: number;
		/** Captures whose channels are not confirmed yet, in work, and failed. */
		recognised: number;
		working: number;
		failed: number;
		/** Checks that block the verdict and that nobody has overruled, as it stood at the last assessment. */
		blocking: number;
	};
	/** Current analyses; the intervals are those of the longest kind each capture gives. */
	readings: { analyses: number; intervals: number; flagged: number };
	assessment: {
		verdict: Verdict;
		evidence: Evidence;
		advisory: boolean;
		/** Orders and totals that carry the verdict, e.g. 5 and "TDD"; some of them. */
		governing: (number | 'THD' | 'TDD')[];
		/** Point, captures or analyses changed after it was made. */
		outdated: boolean;
	} | null;
	actions: { count: number; open: number };
	report: {
		status: 'draft' | 'in-check' | 'returned' | 'issued' | 'superseded' | 'withdrawn';
		revision: string;
	} | null;
}

export type SurveyStageKey = 'point' | 'captures' | 'readings' | 'verdict' | 'remedies' | 'report';

export interface SurveyStage {
	progress: 'done' | 'open' | 'blocked';
	text: string;
	href: string;
	/** Why it cannot be worked yet, as a sentence; null when it can. */
	blockedBy: string | null;
}

export type SurveyStages = Record<SurveyStageKey, SurveyStage>;

const count = (n: number, one: string, many = `${one}s`) =>
	`${n.toLocaleString('en-GB')} ${n === 1 ? one : many}`;

function pointStage({ point }: SurveyProgress): Omit<SurveyStage, 'href'> {
	const [first] = point.gaps;
	const kind = point.kind === 'pcc' ? 'PCC' : 'in-plant';
	const text = `${kind}, ${SYSTEM_WORDS[point.system].short}`;
	return first === undefined
		? { progress: 'done', text, blockedBy: null }
		: { progress: 'open', text: `${text}; ${first.short}`, blockedBy: null };
}

function capturesStage({ captures }: SurveyProgress): Omit<SurveyStage, 'href'> {
	if (captures.count === 0) return { progress: 'open', text: 'none yet', blockedBy: null };
	const text = `${count(captures.files, 'file')}, ${formatDuration(captures.duration_s)}`;
	if (captures.failed > 0)
		return { progress: 'open', text: `${text}; ${captures.failed} failed`, blockedBy: null };
	if (captures.recognised > 0)
		return { progress: 'open', text: `${text}; ${captures.recognised} to confirm`, blockedBy: null };
	if (captures.blocking > 0)
		return {
			progress: 'open',
			text: `${text}; ${count(captures.blocking, 'check')} ${captures.blocking === 1 ? 'blocks' : 'block'}`,
			blockedBy: null
		};
	return { progress: 'done', text, blockedBy: null };
}

function readingsStage({ captures, readings }: SurveyProgress): Omit<SurveyStage, 'href'> {
	if (readings.analyses > 0) {
		const text = `${count(readings.intervals, 'interval')}, ${readings.flagged.toLocaleString('en-GB')} flagged`;
		return captures.working > 0
			? { progress: 'open', text: `${text}; analysing more`, blockedBy: null }
			: { progress: 'done', text, blockedBy: null };
	}
	if (captures.working > 0) return { progress: 'open', text: 'analysing', blockedBy: null };
	if (captures.count === 0)
		return {
			progress: 'blocked',
			text: 'needs a capture',
			blockedBy: 'There is no capture yet. Upload one first.'
		};
	return {
		progress: 'blocked',
		text: 'needs an analysed capture',
		blockedBy: 'No capture is analysed yet. Confirm the channels of a capture; the analysis then starts.'
	};
}

/** Named in the rail before "and n more". */
const GOVERNING_SHOWN = 3;

function governingText(governing: (number | 'THD' | 'TDD')[]): string {
	const names = governing.map((item) => (typeof item === 'number' ? formatOrdinal(item) : item));
	const shown = names.slice(0, GOVERNING_SHOWN).join(', ');
	return names.length > GOVERNING_SHOWN ? `${shown} and ${names.length - GOVERNING_SHOWN} more` : shown;
}

function verdictStage({ readings, assessment }: SurveyProgress): Omit<SurveyStage, 'href'> {
	if (assessment !== null) {
		const word = VERDICT_WORDS[assessment.verdict].word;
		const named = assessment.verdict === 'compliant' || assessment.governing.length === 0;
		const text = named ? word : `${word}: ${governingText(assessment.governing)}`;
		const advisory = assessment.advisory ? `${text} (advisory)` : text;
		return assessment.outdated
			? { progress: 'open', text: `${advisory}; out of date`, blockedBy: null }
			: { progress: 'done', text: advisory, blockedBy: null };
	}
	if (readings.analyses === 0)
		return {
			progress: 'blocked',
			text: 'needs readings',
			blockedBy: 'A verdict needs readings. Upload a capture and confirm its channels first.'
		};
	return { progress: 'open', text: 'not assessed yet', blockedBy: null };
}

function remediesStage({ assessment, actions }: SurveyProgress): Omit<SurveyStage, 'href'> {
	if (actions.count > 0) {
		const text = `${count(actions.count, 'action')}, ${actions.open === 0 ? 'none' : actions.open} open`;
		return { progress: actions.open === 0 ? 'done' : 'open', text, blockedBy: null };
	}
	if (assessment === null)
		return {
			progress: 'blocked',
			text: 'needs a verdict',
			blockedBy: 'Remedies follow from a verdict. There is none yet.'
		};
	return { progress: 'open', text: 'not started', blockedBy: null };
}

const REPORT_WORDS: Record<NonNullable<SurveyProgress['report']>['status'], string> = {
	draft: 'draft',
	'in-check': 'in check',
	returned: 'returned',
	issued: 'issued',
	superseded: 'superseded',
	withdrawn: 'withdrawn'
};

/** "issued, rev A". */
export function reportText(report: NonNullable<SurveyProgress['report']>): string {
	return `${REPORT_WORDS[report.status]}, rev ${report.revision}`;
}

function reportStage({ assessment, report }: SurveyProgress): Omit<SurveyStage, 'href'> {
	if (report !== null)
		return {
			progress: report.status === 'issued' ? 'done' : 'open',
			text: reportText(report),
			blockedBy: null
		};
	if (assessment === null)
		return {
			progress: 'blocked',
			text: 'needs a verdict',
			blockedBy: 'A report states a verdict. There is none yet.'
		};
	return { progress: 'open', text: 'not started', blockedBy: null };
}

/** The six stages of a survey: what each holds, and what blocks it. */
export function surveyStages(progress: SurveyProgress): SurveyStages {
	const at = (key: SurveyStageKey) => `/surveys/${progress.surveyId}/${key}`;
	return {
		point: { ...pointStage(progress), href: at('point') },
		captures: { ...capturesStage(progress), href: at('captures') },
		readings: { ...readingsStage(progress), href: at('readings') },
		verdict: { ...verdictStage(progress), href: at('verdict') },
		remedies: { ...remediesStage(progress), href: at('remedies') },
		report: { ...reportStage(progress), href: at('report') }
	};
}

const STAGE_ORDER: readonly SurveyStageKey[] = [
	'point',
	'captures',
	'readings',
	'verdict',
	'remedies',
	'report'
];

/**
 * Where to go on with a survey: the first stage that is neither done nor blocked, else the verdict's last word, the
 * report. Remedies hold nobody up: a compliant point needs none.
 */
export function nextStage(stages: SurveyStages): SurveyStageKey {
	const open = STAGE_ORDER.filter((key) => key !== 'remedies').find((key) => stages[key].progress === 'open');
	return open ?? 'report';
}
