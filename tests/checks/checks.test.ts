import { describe, expect, it } from 'vitest';
import type { CaptureCheck } from '$lib/checks/capture-check';
import type { CaptureSubject, CheckedPoint } from '$lib/checks/capture-subject';
import { blockedLevels } from '$lib/checks/blocked-levels';
import { checkCalibration } from '$lib/checks/calibration-check';
import { checkCapture } from '$lib/checks/check-capture';
import { checkClock, MOST_ZONE_SPREAD_MS } from '$lib/checks/clock-check';
import { checkFloors } from '$lib/checks/floor-check';
import { checkLoad } from '$lib/checks/load-check';
import { withOverrules, type Overrule } from '$lib/checks/overrule';
import { checkDays, checkSequence } from '$lib/checks/survey-checks';
import type { CaptureEvidence } from '$lib/harmonics/quality/capture-evidence';

const START_MS = Date.parse('2026-03-10T15:00:00Z');
const HOUR_MS = 3_600_000;

// All thresholds are this product's own or common practice, each with its reason beside the constant.
const POINT: CheckedPoint = {
	nominalVoltages_V: { L1: 230, L2: 230, L3: 230 },
	demandCurrent_A: 100,
	phaseNames: { L1: 'L1', L2: 'L2', L3: 'L3', N: 'N' },
	timeZone: 'Europe/Berlin',
	limits: { voltage: null, current: null }
};

function channel(change: Partial<CaptureEvidence['channels'][number]> = {}) {
	return {
		channelIndex: 0,
		name: 'I1',
		quantity: 'current' as const,
		phase: 'L1' as const,
		rms: 60,
		dc: 0,
		fundamental: { rms: 60, phase_deg: -20 },
		floor: [],
		excerpt: null,
		missingOrders: [],
		highestOrder: 50,
		implausible: [],
		...change
	};
}

function subject(
	change: Partial<CaptureSubject> = {},
	channels: CaptureEvidence['channels'] = [channel()]
): CaptureSubject {
	return {
		captureId: 'c1',
		name: 'feeder',
		kind: 'waveform',
		evidence: {
			samplingRate_Hz: 10_000,
			frequency_Hz: 50,
			statedFrequency_Hz: 50,
			stretches: [{ from_s: 0, to_s: 3600 }],
			stretchCount: 1,
			channels
		},
		remarks: [],
		readerRemarks: [],
		nominalFrequency_Hz: 50,
		statedStart: { local: '2026-03-10T16:00:00', utcOffset_min: null },
		start_ms: START_MS,
		duration_s: 3600,
		uploaded_ms: START_MS + 5 * HOUR_MS,
		instrument: {
			name: 'Recorder 1',
			certificates: [{ certificateNumber: 'K-1', calibratedOn: '2025-04-01', dueOn: '2026-04-01' }]
		},
		...change
	};
}

describe('current against I_L', () => {
	const outcome = (rms: number) => checkLoad(subject({}, [channel({ rms })]), POINT).outcome;

	it('passes up to one and a half times the demand current and warns above', () => {
		expect(outcome(149)).toBe('passes');
		expect(outcome(151)).toBe('warns');
	});
	it('passes from two percent of it and warns below', () => {
		expect(outcome(2.1)).toBe('passes');
		expect(outcome(1.9)).toBe('warns');
	});
	it('is not made while I_L is not known', () => {
		expect(checkLoad(subject(), { ...POINT, demandCurrent_A: null }).outcome).toBe('not-checked');
	});
});

describe('noise floor', () => {
	const limits = { limits_pct: [null, null, 1, 4], words: 'of demand current', base: () => 100 };
	const outcome = (floor_A: number) =>
		checkFloors(subject({}, [channel({ floor: [null, null, floor_A, 0.1] })]), {
			...POINT,
			limits: { voltage: null, current: limits }
		})[0]!;

	it('passes below a third of the smallest limit and warns above', () => {
		expect(outcome(0.33).outcome).toBe('passes');
		expect(outcome(0.34).outcome).toBe('warns');
	});
	it('names the order that comes closest and draws floor and limit', () => {
		expect(outcome(0.34).sentence).toContain('2nd order of L1');
		expect(outcome(0.34).evidence).toMatchObject({
			kind: 'floor',
			orders: [2, 3],
			limits: [1, 4],
			sets: [{ floor: [0.34, 0.1] }]
		});
	});
});

describe('time zone and clock', () => {
	const codes = (change: Partial<CaptureSubject>) =>
		checkClock(subject(change), POINT).map(({ code, outcome }) => `${code}: ${outcome}`);

	it('passes without a stated zone, and with the site’s own', () => {
		expect(codes({})).toEqual(['clock: passes']);
		expect(codes({ statedStart: { local: '2026-03-10T16:00:00', utcOffset_min: 60 } })).toEqual([
			'clock: passes'
		]);
	});
	it('warns of a zone that is not the site’s at that date, and only notes UTC', () => {
		expect(codes({ statedStart: { local: '2026-03-10T17:00:00', utcOffset_min: 120 } })).toEqual([
			'zone-differs: warns'
		]);
		expect(codes({ statedStart: { local: '2026-03-10T15:00:00', utcOffset_min: 0 } })).toEqual([
			'zone-differs: notes'
		]);
	});
	it('warns of a start after the upload and blocks where no zone explains it', () => {
		expect(codes({ uploaded_ms: START_MS - 4 * 60_000 })).toEqual(['clock: passes']);
		expect(codes({ uploaded_ms: START_MS - HOUR_MS })).toEqual(['start-after-upload: warns']);
		expect(codes({ uploaded_ms: START_MS - MOST_ZONE_SPREAD_MS - 1 })).toEqual([
			'start-after-upload: blocks'
		]);
	});
	it('warns of the hour that the clock shows twice', () => {
		// Central European Summer Time ends on 25 October 2026 at 03:00 (Directive 2000/84/EC).
		const change = { start_ms: Date.parse('2026-10-25T00:30:00Z'), uploaded_ms: Date.parse('2026-10-26') };
		expect(codes({ ...change, statedStart: { local: '2026-10-25T02:30:00', utcOffset_min: null } })).toEqual([
			'start-ambiguous: warns'
		]);
		expect(codes({ ...change, statedStart: { local: '2026-10-25T03:30:00', utcOffset_min: null } })).toEqual([
			'clock: passes'
		]);
	});
	it('warns of a clock that was never set', () => {
		expect(codes({ start_ms: Date.parse('2000-01-01T00:03:00Z'), statedStart: null })).toEqual([
			'clock-never-set: warns'
		]);
		expect(codes({ start_ms: Date.parse('2001-01-02T00:00:00Z'), statedStart: null })).toEqual([
			'clock: passes'
		]);
	});
	it('passes on what the reader found about the clock', () => {
		const remark = {
			severity: 'warning' as const,
			code: 'clock-unsynchronised',
			sentence: 'Lost its source.'
		};
		expect(codes({ readerRemarks: [remark] })).toEqual(['clock-unsynchronised: warns']);
	});
});

describe('calibration', () => {
	const on = (day: string) =>
		checkCalibration(subject({ start_ms: Date.parse(`${day}T12:00:00Z`) }), POINT).outcome;
	it('counts on the due day and not on the day after', () => {
		expect(on('2026-04-01')).toBe('passes');
		expect(on('2026-04-02')).toBe('warns');
	});
	it('warns where no instrument is named, or none of its certificates is on record', () => {
		expect(checkCalibration(subject({ instrument: null }), POINT).outcome).toBe('warns');
		expect(
			checkCalibration(subject({ instrument: { name: 'R', certificates: [] } }), POINT).sentence
		).toContain('No calibration certificate');
	});
});

describe('the captures together', () => {
	const at = (start_ms: number, name: string) => subject({ start_ms, name });
	const outcome = (second_ms: number) => checkSequence([at(START_MS, 'a'), at(second_ms, 'b')], POINT)[0]!;

	it('tells a gap, an overlap and neither', () => {
		expect(outcome(START_MS + HOUR_MS).outcome).toBe('passes');
		expect(outcome(START_MS + HOUR_MS + 1000).code).toBe('captures-apart');
		expect(outcome(START_MS + HOUR_MS - 1000).code).toBe('captures-overlap');
	});
	it('says nothing about a single capture', () => {
		expect(checkSequence([at(START_MS, 'a')], POINT)).toEqual([]);
	});
	it('asks for the week of a weekly percentile, an overlap counted once', () => {
		const days = (count: number) => {
			const one = subject({ duration_s: count * 86_400 });
			one.evidence!.stretches = [{ from_s: 0, to_s: count * 86_400 }];
			return one;
		};
		const weekly = [{ period: 'week' as const, percentile: 95 }];
		expect(checkDays([days(7)], weekly, POINT)[0]!.outcome).toBe('passes');
		expect(checkDays([days(6.5)], weekly, POINT)[0]!.outcome).toBe('warns');
		expect(checkDays([days(4), days(4)], weekly, POINT)[0]!.outcome).toBe('warns');
		expect(checkDays([days(1)], [{ period: 'day', percentile: 99 }], POINT)[0]!.outcome).toBe('passes');
		expect(checkDays([days(7)], [], POINT)[0]!.outcome).toBe('not-checked');
	});
});

describe('a trend log', () => {
	const trend = (channels: CaptureEvidence['channels'], more: Partial<CaptureEvidence> = {}) => {
		const one = subject({ kind: 'trend' }, channels);
		return { ...one, evidence: { ...one.evidence!, ...more } };
	};
	const voltage = (rms: number) =>
		channel({ quantity: 'voltage', rms, fundamental: { rms, phase_deg: null }, name: 'U1' });
	const found = (one: CaptureSubject) =>
		checkCapture(one, POINT)
			.filter(({ outcome }) => outcome === 'blocks' || outcome === 'warns')
			.map(({ code }) => code);

	it('is blocked by a voltage 20 % off nominal, on its conductor alone', () => {
		expect(found(trend([voltage(185)]))).toEqual([]);
		expect(found(trend([voltage(183)]))).toEqual(['voltage-far-from-nominal']);
	});
	it('names √3', () => {
		const checks = checkCapture(trend([voltage(398)]), POINT);
		expect(checks.find(({ code }) => code === 'voltage-far-from-nominal')!.sentence).toContain('√3');
	});
	it('is blocked by values that cannot be, and warned of columns that are missing and of breaks', () => {
		expect(
			found(trend([channel({ implausible: ['3 of 9 intervals hold rms values below zero.'] })]))
		).toEqual(['implausible-values']);
		expect(found(trend([channel({ missingOrders: [4, 6] })]))).toEqual(['order-columns']);
		const stretches = [
			{ from_s: 0, to_s: 600 },
			{ from_s: 1800, to_s: 3600 }
		];
		expect(found(trend([channel()], { stretches, stretchCount: 2 }))).toEqual(['missing-samples']);
	});
	it('is blocked by another network’s frequency', () => {
		expect(found(trend([channel()], { frequency_Hz: 54.9 }))).toEqual([]);
		expect(found(trend([channel()], { frequency_Hz: 60 }))).toEqual(['wrong-nominal-frequency']);
	});
});

describe('overrules', () => {
	const check: CaptureCheck = {
		code: 'clipped',
		title: 'Clipping',
		outcome: 'blocks',
		sentence: 'I1: the crest is cut off.',
		advice: '',
		channelIndex: 0,
		evidence: null
	};
	const said: Overrule = {
		id: 'o1',
		captureId: 'c1',
		code: 'clipped',
		channelIndex: 0,
		sentence: check.sentence,
		reason: 'One inrush only; the load does that.',
		by: 'Mara Ellison',
		at: '2026-03-11T10:00:00.000Z',
		takenBackBy: null,
		takenBackAt: null
	};
	const judged = [
		{
			captureId: 'c1',
			name: 'feeder',
			channels: [
				{ channelIndex: 0, quantity: 'current' as const, phase: 'L1' as const },
				{ channelIndex: 1, quantity: 'current' as const, phase: 'L2' as const }
			]
		}
	];
	const blocked = (overrules: Overrule[], change: Partial<CaptureCheck> = {}) =>
		blockedLevels(withOverrules([{ captureId: 'c1', check: { ...check, ...change } }], overrules), judged);

	it('a block forbids its own conductor; one of the whole capture forbids all', () => {
		expect(blocked([]).map(({ phase }) => phase)).toEqual(['L1']);
		expect(blocked([], { channelIndex: null }).map(({ phase }) => phase)).toEqual(['L1', 'L2']);
		expect(blocked([], { outcome: 'warns' })).toEqual([]);
	});
	it('counts until it is taken back', () => {
		expect(blocked([said])).toEqual([]);
		expect(blocked([{ ...said, takenBackAt: '2026-03-12T10:00:00.000Z' }])).toHaveLength(1);
	});
	it('does not count for another finding, channel or capture', () => {
		expect(blocked([said], { sentence: 'I1: cut off more often.' })).toHaveLength(1);
		expect(blocked([{ ...said, channelIndex: 1 }])).toHaveLength(1);
		expect(blocked([{ ...said, captureId: 'c2' }])).toHaveLength(1);
	});
	it('stays on record when it no longer counts', () => {
		const [one] = withOverrules(
			[{ captureId: 'c1', check: { ...check, sentence: 'I1: cut off more often.' } }],
			[said]
		);
		expect(one!.overrule).toBeNull();
		expect(one!.earlier).toEqual([said]);
	});
});

describe('a sound capture', () => {
	it('shows what was checked and is in order', () => {
		const checks = checkCapture(subject(), POINT);
		expect(checks.filter(({ outcome }) => outcome === 'passes').map(({ code }) => code)).toEqual(
			expect.arrayContaining(['clipped', 'dead-channel', 'same-signal', 'dc-offset', 'clock', 'calibration'])
		);
		expect(checks.find(({ code }) => code === 'reversed-ct')!.outcome).toBe('not-checked');
		expect(checks.every(({ outcome }) => outcome !== 'blocks' && outcome !== 'warns')).toBe(true);
	});
	it('analysed before evidence was kept, claims no pass of a signal check', () => {
		const checks = checkCapture(subject({ evidence: null }), POINT);
		expect(checks.find(({ code }) => code === 'clipped')!.outcome).toBe('not-checked');
	});
});
