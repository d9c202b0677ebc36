import { assess } from '$lib/assessment/assess';
import type { DecisionRule } from '$lib/assessment/assessment';
import { chainUncertainty } from '$lib/assessment/uncertainty-statement';
import type { Phase } from '$lib/recording/phase';
import { toAssessedPoint } from '$lib/register/assessed-point';
import type { PointFacts } from '$lib/register/point-facts';
import { buildReportModel, type ReportSources } from '$lib/report/build-report-model';
import type { ReportModel } from '$lib/report/report-model';
import { chainOf } from '$lib/uncertainty/survey-chain';
import { makeSeries, spectrum, WEEK_10MIN } from '../assessment/series-builder';
import { limitSet } from '../limits/load-limit-files';

export const POINT_FACTS: PointFacts = {
	name: 'Main switchboard',
	kind: 'pcc',
	system: 'four-wire',
	nominalVoltage_V: 480,
	nominalFrequency_Hz: 60,
	demand: {
		method: 'monthly',
		quantity: 'apparent',
		demands: [1.05e6, 1.06e6, 1.04e6, 1.07e6, 1.08e6, 1.09e6, 1.1e6, 1.08e6, 1.06e6, 1.05e6, 1.06e6, 1.07e6],
		powerFactor: null,
		source: 'meter readings of the utility'
	},
	shortCircuit: {
		method: 'transformer',
		rating_VA: 2.0e6,
		impedance_pct: 5.75,
		upstreamFaultLevel_VA: 500e6,
		source: 'nameplate'
	},
	phaseNames: { L1: 'A', L2: 'B', L3: 'C', N: 'N' },
	currentTransformer: { primary: 1600, secondary: 5 },
	voltageTransformer: null,
	limitSetId: 1,
	limitSetReason: 'The utility’s tariff calls it up.',
	notes: ''
};

const SIX_PULSE: Record<number, number> = {
	3: 0.6,
	5: 9.4,
	7: 5.3,
	11: 3.45,
	13: 2.2,
	17: 1.4,
	19: 1.05,
	23: 0.83,
	25: 0.65
};
const SCALE: Record<string, number> = { L1: 0.98, L2: 0.95, L3: 1.02 };

export interface SourcesChange {
	facts?: Partial<PointFacts>;
	currents?: Record<number, number>;
	decisionRule?: DecisionRule;
	document?: Partial<ReportSources['document']>;
	practice?: Partial<ReportSources['practice']>;
	/** Only a short capture of 10/12-cycle windows. */
	snapshot?: boolean;
}

/** Sources of a report on an invented site, with a week of ten-minute values made from stated spectra. */
export function reportSources(change: SourcesChange = {}): ReportSources {
	const facts = { ...POINT_FACTS, ...change.facts };
	const currents = change.currents ?? SIX_PULSE;
	const kind = change.snapshot ? ('window' as const) : ('10min' as const);
	const count = change.snapshot ? 50 : WEEK_10MIN;
	const wobble = (i: number) => 1 + 0.05 * Math.sin((2 * Math.PI * i) / 144);
	const phases = ['L1', 'L2', 'L3'] as const;
	const series = phases.flatMap((phase) => {
		const scale = SCALE[phase] ?? 1;
		const current = spectrum(1000, currents);
		const voltage = spectrum(facts.nominalVoltage_V / Math.sqrt(3), { 5: 2.6, 7: 1.4, 11: 0.9, 13: 0.5 });
		return [
			makeSeries({
				quantity: 'current',
				phase,
				interval: kind,
				count,
				level: (order, i) => current(order) * scale * wobble(i),
				flagged: (i) => i % 200 === 13
			}),
			makeSeries({
				quantity: 'voltage',
				phase,
				interval: kind,
				count,
				level: (order) => (order === 1 ? voltage(1) : voltage(order) * scale),
				flagged: (i) => i % 200 === 13
			})
		];
	});
	const uncertainty = chainUncertainty(
		chainOf({
			nominalFrequency_Hz: facts.nominalFrequency_Hz,
			instrumentClass: 'I',
			voltageSensorError_pct: null,
			currentSensorError_pct: 0.5,
			voltageTransformerPrimary_V: facts.voltageTransformer?.primary ?? null,
			currentTransformerPrimary_A: facts.currentTransformer?.primary ?? null
		})
	);
	const set = limitSet('ieee-519-2022');
	const assessment = assess({
		point: toAssessedPoint(facts),
		limitSet: set,
		series,
		siteTimeZone: 'America/Chicago',
		uncertainty,
		decisionRule: change.decisionRule ?? 'guarded'
	});
	const start = Date.parse('2026-03-03T06:00:00Z');
	const times_ms = Array.from({ length: 1008 }, (_, i) => start + i * 600_000);
	return {
		document: {
			title: 'Harmonic compliance report',
			number: 'TH-2026-0142',
			revision: 'A',
			status: 'issued',
			reason: 'First issue',
			preparedBy: 'M. Adeyemi',
			preparedAt: '2026-03-18T10:00:00.000Z',
			checkedBy: 'J. Holloway',
			issuedAt: '2026-03-19T09:30:00.000Z',
			selfChecked: false,
			revisions: [
				{
					revision: 'A',
					status: 'issued',
					reason: 'First issue',
					preparedBy: 'M. Adeyemi',
					checkedBy: 'J. Holloway',
					issuedAt: '2026-03-19T09:30:00.000Z'
				}
			],
			createdAt: '2026-03-19T09:30:00.000Z',
			...change.document
		},
		practice: {
			name: 'Tarn & Holloway Power Engineers',
			shortName: 'Tarn & Holloway',
			address: '4 Tarn Street, Millbrook',
			email: 'office@tarn-holloway.example',
			phone: '',
			paper: 'A4',
			timeZone: 'America/Chicago',
			relianceStatement: '',
			...change.practice
		},
		client: { name: 'Bellwether Cold Store' },
		site: {
			name: 'Harrow Dock 4',
			address: 'Dock Road 4, Harrow',
			utility: 'County Electric',
			timeZone: 'America/Chicago'
		},
		survey: {
			number: 'S-0142',
			title: 'Harmonic survey at Harrow Dock 4, March 2026',
			engineer: 'M. Adeyemi',
			measuredFrom: '2026-03-03T06:00:00.000Z',
			measuredTo: '2026-03-10T06:00:00.000Z'
		},
		summary:
			'The variable-speed compressors draw a current with more 5th harmonic than the utility allows.\n\nNothing needs to be switched off today; the cure can be planned.',
		findings: [
			'The 5th harmonic of current exceeds its limit on all three phases.',
			'Total demand distortion exceeds its limit.',
			'Voltage distortion keeps every limit.'
		],
		actions: [
			{
				title: 'Ask the drive supplier for line reactors of 5 %',
				detail: 'Preliminary: a licensed engineer verifies the sizing.',
				priority: 'urgent',
				side: 'client',
				responsible: 'Facilities',
				dueOn: '2026-04-30'
			},
			{
				title: 'Measure again after the change',
				detail: '',
				priority: 'normal',
				side: 'practice',
				responsible: '',
				dueOn: '2026-06-15'
			}
		],
		instrument: {
			name: 'Recorder 2',
			model: 'PQ-7',
			serialNumber: '70-1138',
			harmonicClass: 'I',
			sensors: 'Flexible clamps 3000 A, class 0.5',
			calibrations: [
				{
					certificate: 'C-2025-881',
					laboratory: 'Millbrook Metrology',
					calibratedOn: '2025-09-01',
					dueOn: '2026-09-01'
				}
			],
			calibratedDuringSurvey: true
		},
		waveform: change.snapshot ? null : waveform(),
		trends: change.snapshot
			? []
			: [
					{
						title: 'Current TDD over the week',
						quantity: 'current',
						ofWhat: 'of demand current',
						phases: phases.map((phase: Phase) => ({
							phase,
							times_ms,
							values_pct: times_ms.map((_, i) => 11.3 * (SCALE[phase] ?? 1) * wobble(i))
						})),
						flagged: [{ from_ms: start + 13 * 600_000, to_ms: start + 14 * 600_000 }],
						percentile: null,
						limit_pct: 8
					}
				],
		quality: {
			checks: [
				{
					capture: 'week-10.csv',
					title: 'Current against demand current',
					outcome: 'warns',
					sentence: 'I L1 9 A, I L2 9 A, I L3 8 A: less than 2 % of the maximum demand current I_L of 600 A.',
					overrule: {
						reason: 'The plant stood still over the holiday; the client knows and wants it so.',
						by: 'Mara Ellison',
						at: '2026-03-12T09:00:00.000Z'
					}
				},
				{
					capture: 'week-10.csv',
					title: 'Time zone and clock',
					outcome: 'notes',
					sentence: 'The clock of the recorder was set once during the week; no interval was lost.',
					overrule: null
				},
				{
					capture: 'week-10.csv',
					title: 'Voltage against nominal',
					outcome: 'passes',
					sentence: 'Every voltage lies within 20 % of its nominal value, so ratios and units fit.',
					overrule: null
				}
			],
			flagged: [
				{
					interval: '10min',
					startsAt: '2026-03-03T08:10:00.000Z',
					length_s: 600,
					quantity: 'voltage',
					phase: 'L1'
				}
			],
			flaggedTotal: 1,
			intervalTotal: 1008
		},
		pointFacts: facts,
		assessment,
		assessmentId: '2f1c9a4e-7d8b-4a57-9a51-0d3a6f1c2b11',
		engineVersion: '1.0.0',
		limitSet: set,
		limitSetSourceSha256: 'ab'.repeat(32),
		limitSetReason: facts.limitSetReason,
		uncertaintyAtOrders: [1, 5, 25].map((order) => ({
			order,
			voltage_pct: uncertainty.voltage_pctOfReading(order),
			current_pct: uncertainty.current_pctOfReading(order)
		})),
		captures: [
			{
				name: 'week-10.csv',
				format: 'delimited text',
				variant: 'comma separated',
				startedAt: '2026-03-03T06:00:00.000Z',
				duration_s: 604_800,
				samplingRate_Hz: null,
				windowCount: 0,
				files: [{ name: 'week-10.csv', sha256: '9f3c51aa07e2b6d4'.repeat(4), size_bytes: 1_482_113 }],
				channels: phases.map((phase) => ({
					channel: `I ${phase}`,
					quantity: 'current',
					phase,
					toPrimary: 320
				}))
			}
		]
	};
}

function waveform(): ReportSources['waveform'] {
	const shift: Record<string, number> = { L1: 0, L2: -120, L3: 120 };
	return {
		title: 'Waveform of the worst window: 5th harmonic, phase C',
		captureName: 'event-3',
		from_s: 1.2,
		to_s: 1.4,
		channels: (['voltage', 'current'] as const).flatMap((quantity) =>
			(['L1', 'L2', 'L3'] as const).map((phase) => ({
				quantity,
				phase,
				unit: quantity === 'voltage' ? ('V' as const) : ('A' as const),
				points: Array.from({ length: 600 }, (_, i) => {
					const t = 1.2 + (0.2 * i) / 599;
					const angle = 2 * Math.PI * 60 * t + ((shift[phase] ?? 0) * Math.PI) / 180;
					const value =
						quantity === 'voltage'
							? 391.9 * Math.sin(angle)
							: 1414 * Math.sin(angle) + 133 * Math.sin(5 * angle);
					return [t, value];
				}).flat()
			}))
		)
	};
}

export function reportModel(change: SourcesChange = {}): ReportModel {
	const model = buildReportModel(reportSources(change));
	return { ...model, lineage: { ...model.lineage, dataSha256: '9f3c51aa07e2b6d4'.repeat(4) } };
}
