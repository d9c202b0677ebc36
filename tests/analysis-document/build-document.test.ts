import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import type { AnalysisRequest } from '$lib/analysis-document/analysis-request';
import { assessmentEntry } from '$lib/analysis-document/assessment-entry';
import { analysisDocument } from '$lib/analysis-document/build-document';
import { analysisDocumentSchema, analysisJsonSchema } from '$lib/analysis-document/document-schema';
import { parsePointFile } from '$lib/analysis-document/point-file';
import { rounded, roundedAngle_deg, roundedLevel } from '$lib/analysis-document/rounded';
import { readCapture } from '$lib/recording/read-capture';
import type { Recording, Trend } from '$lib/recording/recording';
import { sourceOf } from '$lib/recording/sample-source';
import type { ChannelTruth } from '$lib/synthesis/waveform';
import { synthesiseRecording } from '$lib/synthesis/waveform-recording';
import { threePhaseChannels } from '$lib/synthesis/waveform-three-phase';
import { limitSet } from '../limits/load-limit-files';

const FILES = [{ name: 'capture.cfg', sha256: '0'.repeat(64) }];

function request(content: Recording | Trend, more: Partial<AnalysisRequest> = {}): AnalysisRequest {
	return {
		content: content.kind === 'trend' ? content : sourceOf(content),
		files: FILES,
		nominalFrequency_Hz: null,
		timeZone: 'UTC',
		start: null,
		judged: null,
		...more
	};
}

function documentOf(asked: AnalysisRequest) {
	const made = analysisDocument(asked);
	if (!made.ok) throw new Error(made.problem);
	expect(analysisDocumentSchema.parse(JSON.parse(JSON.stringify(made.value)))).toEqual(made.value);
	return made.value;
}

function judgedBy(key: string, facts: object): NonNullable<AnalysisRequest['judged']> {
	const parsed = parsePointFile('p.json', JSON.stringify(facts));
	if (!parsed.ok) throw new Error(parsed.problem);
	const limits = { limitSet: limitSet(key), reason: 'for the test' };
	return {
		facts: parsed.value,
		judge: (measured, series) => assessmentEntry(parsed.value, limits, measured, series)
	};
}

const CHANNELS = threePhaseChannels({
	voltage_V: 230,
	voltageHarmonics: [{ order: 5, magnitude_pctOfFundamental: 4, phase_deg: 0 }],
	current_A: 10,
	currentHarmonics: [{ order: 3, magnitude_pctOfFundamental: 20, phase_deg: 0 }],
	lag_deg: 30
});

function recorded(channels: ChannelTruth[], duration_s: number, samplingRate_Hz = 6400) {
	return synthesiseRecording({ frequency_Hz: 50, samplingRate_Hz, duration_s, seed: 3, channels });
}

describe('the document of a waveform', () => {
	it('refers phases to the first voltage of the file, whichever sets the windows', () => {
		const [u1, u2, , i1] = CHANNELS as [ChannelTruth, ChannelTruth, ChannelTruth, ChannelTruth];
		const { channels, phaseReference } = documentOf(request(recorded([i1, u2, u1], 1)));
		expect(phaseReference).toBe('U2');
		const first = channels.map(({ orders }) => orders[0]!.phase_deg!);
		expect(first[0]).toBeCloseTo(90, 4);
		expect(first[1]).toBe(0);
		expect(first[2]).toBeCloseTo(120, 4);
		// U1 leads U2 by 120°; its own order 5 is at 0° of its fundamental: 5·120° = 600° = −120°.
		expect(channels[2]!.orders[4]!.phase_deg).toBeCloseTo(-120, 4);
	});

	it('gives null where there is nothing to measure: above the rate, on silent channels, at absent orders', () => {
		const silent = { ...CHANNELS[3]!, name: 'I dead', phase: 'N', fundamental_rms: 0 } as ChannelTruth;
		const slow = documentOf(request(recorded([...CHANNELS, silent], 1, 4800)));
		const highest = slow.highestOrder!;
		// 96 samples per cycle carry order 40 and not order 50.
		expect(highest).toBeGreaterThanOrEqual(40);
		expect(highest).toBeLessThan(48);
		const [u1] = slow.channels;
		expect(u1!.orders).toHaveLength(highest);
		expect(u1!.thd40_percent).toBeCloseTo(4, 4);
		expect(u1!.thd50_percent).toBeNull();
		expect(u1!.thdSubgroup_percent).toBeNull();
		expect(u1!.orders[1]!.phase_deg).toBeNull();
		const dead = slow.channels.at(-1)!;
		expect(dead.rms).toBe(0);
		expect([dead.thd40_percent, dead.frequency_Hz, dead.crestFactor]).toEqual([null, null, null]);
		expect(dead.orders.every(({ percent, phase_deg }) => percent === null && phase_deg === null)).toBe(true);
	});

	it('shows channels beside those of the point without mixing them in', () => {
		const feeder = CHANNELS.slice(3).map((one) => ({ ...one, name: `${one.name}b`, fundamental_rms: 4 }));
		const recording = recorded([...CHANNELS, ...feeder], 1);
		const nameless = { ...recording.channels[0]!, index: 9, name: 'Ux', phaseHint: null };
		const other = { ...nameless, index: 10, name: 'Oil', quantity: 'other' as const, unitAsWritten: 'K' };
		recording.channels.push(nameless, other);
		const { channels, powers, leftOut } = documentOf(request(recording));
		expect(channels.map(({ name, use }) => `${name} ${use}`)).toEqual([
			...['U1', 'U2', 'U3', 'I1', 'I2', 'I3'].map((name) => `${name} point`),
			...['I1b', 'I2b', 'I3b', 'Ux'].map((name) => `${name} additional`)
		]);
		expect(channels[9]).toMatchObject({ phase: null, quantity: 'voltage' });
		expect(channels[9]!.orders).toEqual(channels[0]!.orders);
		expect(channels[6]!.orders[0]!.magnitude).toBeCloseTo(4, 6);
		expect(leftOut.map(({ name }) => name)).toEqual(['Oil']);
		// P = 3·230 V·10 A·cos 30°: voltage and current share no other order.
		const total = powers.find(({ phase }) => phase === 'total')!;
		expect(total.activePower_W).toBeCloseTo(3 * 230 * 10 * Math.cos(Math.PI / 6), 2);
	});

	it('forms ten-minute values where a start tells the clock', () => {
		const recording = recorded([CHANNELS[0]!], 1262, 1600);
		const none = documentOf(request(recording));
		expect(none.recording.startTime).toBeNull();
		expect(none.intervals).toMatchObject({ tenMinute: 0, threeSecond: 420 });
		expect(none.remarks.map(({ code }) => code)).toContain('start-not-known');
		const start = { local: '2024-07-01T12:19:00', utcOffset_min: null };
		const stated = documentOf(request(recording, { start, timeZone: 'Europe/London' }));
		expect(stated.recording).toMatchObject({
			startTime: '2024-07-01T11:19:00.000Z',
			startTimeFrom: 'option'
		});
		// From 12:20 to 12:40 of the clock.
		expect(stated.intervals.tenMinute).toBe(2);
	});

	it('flags dips where a nominal voltage is known; means take all windows', () => {
		const channels = CHANNELS.map((one) => ({ ...one, events: [{ from_s: 1, to_s: 1.1, factor: 0.6 }] }));
		const recording = recorded(channels, 4);
		const judged = judgedBy('en-50160-2022', { nominalVoltage_V: 400, kind: 'pcc', system: 'four-wire' });
		const plain = documentOf(request(recording));
		const { intervals, events, channels: found, assessment } = documentOf(request(recording, { judged }));
		expect(plain.events).toBeNull();
		expect(events).toHaveLength(1);
		expect(events![0]).toMatchObject({ kind: 'dip', phases: ['L1', 'L2', 'L3'] });
		expect(intervals.flagged).toBeGreaterThan(0);
		expect(found.map(({ rms }) => rms)).toEqual(plain.channels.map(({ rms }) => rms));
		// Windows without the dip are judged although the one 3 s value holds it: order 5 is 4 % of the fundamental.
		const fifth = assessment!.rows.find(({ order, phase }) => order === 5 && phase === 'L2')!;
		expect(fifth.value_percent).toBeCloseTo(4, 3);
		expect(fifth.statistic).toBe('snapshot');
	});

	it('refuses what it cannot analyse with a sentence', () => {
		const short = analysisDocument(request(recorded(CHANNELS, 0.1)));
		expect(short.ok || short.problem).toMatch(/Record at least half a second/);
		const other = recorded(CHANNELS.slice(0, 1), 1);
		other.channels[0]!.quantity = 'other';
		const nothing = analysisDocument(request(other));
		expect(nothing.ok || nothing.problem).toMatch(/capture\.cfg holds no channel .* write the units/);
	});
});

describe('the document of a log', () => {
	const bytes = new Uint8Array(readFileSync('fixtures/captures/one-day-ten-minutes.csv'));
	const read = readCapture([{ name: 'log.csv', bytes }]);
	if (!read.ok || read.value.kind !== 'trend') throw new Error('the fixture is no log');
	const log = read.value;

	it('gives levels over the rows and judges them', () => {
		const judged = judgedBy('en-50160-2022', { nominalVoltage_V: 230, system: 'single-phase', kind: 'pcc' });
		const made = documentOf(request(log, { judged, nominalFrequency_Hz: 50 }));
		expect(made.intervals).toEqual({ window: 0, threeSecond: 0, tenMinute: 144, flagged: 2, twoHour: 12 });
		const [voltage, current] = made.channels;
		expect(voltage).toMatchObject({ name: 'U_L1 rms (V)', phase: 'L1', thd40_percent: null, dc: null });
		// 20 + 5·sin over whole turns but one row (fixtures/PROVENANCE.md, capture-fixtures.ts): √(20² + 5²/2).
		expect(current!.orders).toHaveLength(1);
		expect(current!.orders[0]!.magnitude).toBeCloseTo(Math.sqrt(400 + 12.5), 1);
		expect(made.assessment!.rows.some(({ order, value_percent }) => order === 5 && value_percent! > 3)).toBe(
			true
		);
	});

	it('asks for the frequency where it needs it, and for another spacing where this one is no use', () => {
		const judged = judgedBy('en-50160-2022', { nominalVoltage_V: 230 });
		const asked = analysisDocument(request(log, { judged }));
		expect(asked.ok || asked.problem).toContain('--nominal-frequency');
		const quarter = analysisDocument(request({ ...log, interval_s: 900 }));
		expect(quarter.ok || quarter.problem).toContain('900 s');
	});
});

describe('figures in the document', () => {
	it('have nine significant digits, null for no data, and no negative zero', () => {
		expect(rounded(123.4567890123)).toBe(123.456789);
		expect(rounded(NaN)).toBeNull();
		expect(rounded(Infinity)).toBeNull();
		expect(Object.is(rounded(-0), 0)).toBe(true);
		expect(roundedLevel(1e-14, 230)).toBe(0);
		expect(roundedLevel(1e-6, 230)).toBeCloseTo(1e-6, 10);
		expect(roundedAngle_deg(-179.9999999, 1, 1)).toBe(180);
		expect(roundedAngle_deg(12, 1e-12, 1)).toBeNull();
	});

	it('obey the JSON Schema in docs', () => {
		const published: unknown = JSON.parse(readFileSync('docs/analyse-output.schema.json', 'utf8'));
		// Differs? node --import tsx scripts/write-analyse-schema.ts
		expect(published).toEqual(JSON.parse(JSON.stringify(analysisJsonSchema())));
	});
});
