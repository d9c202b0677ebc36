import { describe, expect, it } from 'vitest';
import { nextStage, surveyStages, type SurveyProgress } from '$lib/register/survey-stages';

const fresh: SurveyProgress = {
	surveyId: 's1',
	point: { kind: 'pcc', system: 'four-wire', gaps: [] },
	captures: { count: 0, files: 0, duration_s: 0, recognised: 0, working: 0, failed: 0, blocking: 0 },
	readings: { analyses: 0, intervals: 0, flagged: 0 },
	assessment: null,
	actions: { count: 0, open: 0 },
	report: null
};
const measured: SurveyProgress = {
	...fresh,
	captures: { ...fresh.captures, count: 1, files: 3, duration_s: 613_440 },
	readings: { analyses: 1, intervals: 1008, flagged: 6 }
};
const judged: SurveyProgress = {
	...measured,
	assessment: {
		verdict: 'exceeds',
		evidence: 'weekly',
		advisory: false,
		governing: [5, 'TDD'],
		outdated: false
	}
};
const texts = (progress: SurveyProgress) =>
	Object.fromEntries(Object.entries(surveyStages(progress)).map(([key, stage]) => [key, stage.text]));

describe('stages of a survey', () => {
	it('a fresh one starts with captures and says what the rest waits for', () => {
		const stages = surveyStages(fresh);
		expect(texts(fresh)).toMatchObject({
			point: 'PCC, 4-wire',
			captures: 'none yet',
			readings: 'needs a capture'
		});
		expect(stages.readings.progress).toBe('blocked');
		expect(stages.verdict.progress).toBe('blocked');
		expect(nextStage(stages)).toBe('captures');
	});

	it('an incomplete point is where work goes on', () => {
		const gaps = [{ fact: 'demand-current' as const, short: 'needs a demand current', sentence: '' }];
		const stages = surveyStages({ ...fresh, point: { ...fresh.point, gaps } });
		expect(stages.point).toMatchObject({ progress: 'open', text: 'PCC, 4-wire; needs a demand current' });
		expect(nextStage(stages)).toBe('point');
	});

	it('names the orders that govern', () => {
		expect(texts(judged)).toMatchObject({
			captures: '3 files, 7\u00a0d 2\u00a0h',
			readings: '1,008 intervals, 6 flagged',
			verdict: 'exceeds: 5th, TDD',
			remedies: 'not started',
			report: 'not started'
		});
		const many: SurveyProgress = {
			...judged,
			assessment: { ...judged.assessment!, governing: [5, 7, 11, 13, 'TDD'], advisory: true }
		};
		expect(texts(many)['verdict']).toBe('exceeds: 5th, 7th, 11th and 2 more (advisory)');
	});

	it('a verdict made before the last change is open again', () => {
		const stages = surveyStages({ ...judged, assessment: { ...judged.assessment!, outdated: true } });
		expect(stages.verdict).toMatchObject({ progress: 'open', text: 'exceeds: 5th, TDD; out of date' });
		expect(nextStage(stages)).toBe('verdict');
	});

	it('goes on to the report once judged, and stays there', () => {
		expect(nextStage(surveyStages(judged))).toBe('report');
		const issued: SurveyProgress = { ...judged, report: { status: 'issued', revision: 'B' } };
		expect(surveyStages(issued).report).toMatchObject({ progress: 'done', text: 'issued, rev B' });
		expect(nextStage(surveyStages(issued))).toBe('report');
	});

	it('shows unconfirmed and failed captures', () => {
		const of = (captures: Partial<SurveyProgress['captures']>) =>
			surveyStages({ ...measured, captures: { ...measured.captures, ...captures } }).captures;
		expect(of({ recognised: 1 })).toMatchObject({
			progress: 'open',
			text: '3 files, 7\u00a0d 2\u00a0h; 1 to confirm'
		});
		expect(of({ failed: 2 }).text).toContain('2 failed');
	});
});
