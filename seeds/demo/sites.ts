import type { InstrumentFacts } from '../../src/lib/register/instrument-facts';
import type { PointFacts } from '../../src/lib/register/point-facts';

/** Limit sets are named by key here; their numbers are the database's affair. */
export type DemoPoint = Omit<PointFacts, 'limitSetId'> & { limitSetKey: string };
export type PointKey = 'harrowMain' | 'harrowPanel' | 'kestrelLv' | 'ostlerIntake' | 'fennimoreIntake';

const ABC = { L1: 'A', L2: 'B', L3: 'C', N: 'N' };
const L123 = { L1: 'L1', L2: 'L2', L3: 'L3', N: 'N' };

export const SITES = {
	harrowDock: {
		name: 'Harrow Dock 4',
		address: '18 Harrow Dock Road, Port Ansel',
		utility: 'Ansel Light & Power',
		timeZone: 'America/New_York',
		notes: ''
	},
	kestrelRow: {
		name: 'Kestrel Row',
		address: '1 Kestrel Row, Thornby',
		utility: 'Thornby Networks',
		timeZone: 'Europe/London',
		notes: 'Ring the loading bay bell; escort needed in the switch room.'
	},
	ostlerLane: {
		name: 'Ostler Lane',
		address: '77 Ostler Lane, Marrow Falls',
		utility: 'Marrow Falls Municipal',
		timeZone: 'America/Chicago',
		notes: ''
	},
	fennimore: {
		name: 'Fennimore Park',
		address: 'Fennimore Park, Aldersea',
		utility: 'Aldersea Electricity',
		timeZone: 'Europe/London',
		notes: 'Theatres must be told before any work at the intake.'
	}
} as const;

export const POINTS: Record<PointKey, DemoPoint> = {
	harrowMain: {
		name: 'Main switchboard',
		kind: 'pcc',
		system: 'four-wire',
		nominalVoltage_V: 480,
		nominalFrequency_Hz: 60,
		demand: {
			method: 'entered',
			demandCurrent_A: 1284,
			source: 'utility bills, mean of twelve monthly maxima'
		},
		shortCircuit: { method: 'current', shortCircuitCurrent_A: 40_060, source: 'utility letter' },
		phaseNames: ABC,
		currentTransformer: { primary: 1600, secondary: 5 },
		voltageTransformer: null,
		limitSetKey: 'ieee-519-2022',
		limitSetReason: 'Named in the service agreement.',
		notes: ''
	},
	harrowPanel: {
		name: 'Compressor panel 2',
		kind: 'in-plant',
		system: 'four-wire',
		nominalVoltage_V: 480,
		nominalFrequency_Hz: 60,
		demand: { method: 'unknown' },
		shortCircuit: {
			method: 'transformer',
			rating_VA: 1_500_000,
			impedance_pct: 5.75,
			upstreamFaultLevel_VA: null,
			source: 'nameplate'
		},
		phaseNames: ABC,
		currentTransformer: { primary: 600, secondary: 5 },
		voltageTransformer: null,
		limitSetKey: 'ieee-519-2022',
		limitSetReason: 'Compared for guidance; the limits bind at the main switchboard.',
		notes: ''
	},
	kestrelLv: {
		name: 'LV board 1, incomer',
		kind: 'pcc',
		system: 'four-wire',
		nominalVoltage_V: 400,
		nominalFrequency_Hz: 50,
		demand: {
			method: 'monthly',
			quantity: 'apparent',
			demands: [438, 441, 446, 452, 455, 461, 468, 466, 458, 450, 444, 440].map((kva) => kva * 1000),
			powerFactor: null,
			source: 'half-hourly meter'
		},
		shortCircuit: {
			method: 'transformer',
			rating_VA: 1_000_000,
			impedance_pct: 4.75,
			upstreamFaultLevel_VA: 250_000_000,
			source: 'nameplate; network operator for the primary'
		},
		phaseNames: L123,
		currentTransformer: { primary: 1500, secondary: 5 },
		voltageTransformer: null,
		limitSetKey: 'en-50160-2022',
		limitSetReason: 'Low-voltage public supply in Europe.',
		notes: ''
	},
	ostlerIntake: {
		name: '13.8 kV intake',
		kind: 'pcc',
		system: 'four-wire',
		nominalVoltage_V: 13_800,
		nominalFrequency_Hz: 60,
		demand: {
			method: 'monthly',
			quantity: 'active',
			demands: [2010, 1985, 2040, 2065, 2110, 2140, 2155, 2150, 2095, 2060, 2035, 2020].map(
				(kw) => kw * 1000
			),
			powerFactor: 0.93,
			source: 'billing demand'
		},
		shortCircuit: { method: 'fault-level', faultLevel_VA: 120_000_000, source: 'utility, minimum normal' },
		phaseNames: ABC,
		currentTransformer: { primary: 200, secondary: 5 },
		voltageTransformer: { primary: 14_400, secondary: 120 },
		limitSetKey: 'ieee-519-2022',
		limitSetReason: 'Utility tariff, clause on harmonic emission.',
		notes: ''
	},
	fennimoreIntake: {
		name: '11 kV intake',
		kind: 'pcc',
		system: 'three-wire',
		nominalVoltage_V: 11_000,
		nominalFrequency_Hz: 50,
		demand: { method: 'entered', demandCurrent_A: 142, source: 'network operator, agreed capacity' },
		shortCircuit: { method: 'fault-level', faultLevel_VA: 150_000_000, source: 'network operator' },
		phaseNames: L123,
		currentTransformer: { primary: 200, secondary: 1 },
		voltageTransformer: { primary: 11_000, secondary: 110 },
		limitSetKey: 'en-50160-2022',
		limitSetReason: 'Medium-voltage public supply in Europe.',
		notes: 'A 1.2 Mvar bank at the intake is switched by the power-factor controller.'
	}
};

export const INSTRUMENTS: {
	facts: InstrumentFacts;
	calibratedDaysAgo: number;
	dueInDays: number;
	certificate: string;
	resolution_bits: number;
}[] = [
	{
		facts: {
			name: 'Recorder 2',
			model: 'eight-channel power quality recorder',
			serialNumber: 'R2-0417',
			harmonicClass: 'I',
			channels: '4 voltages, 4 currents',
			sensors: 'split-core current sensors 2000 A, class 0.5',
			inputs: [],
			currentSensorError_pct: 0.5,
			voltageSensorError_pct: null,
			notes: ''
		},
		calibratedDaysAgo: 262,
		dueInDays: 105,
		certificate: 'CAL-26-1188',
		resolution_bits: 18
	},
	{
		facts: {
			name: 'Recorder 5',
			model: 'four-channel power quality recorder',
			serialNumber: 'R5-0093',
			harmonicClass: 'II',
			channels: '4 voltages, 4 currents',
			sensors: 'flexible current sensors 3000 A, class 1',
			inputs: [],
			currentSensorError_pct: 1,
			voltageSensorError_pct: null,
			notes: ''
		},
		calibratedDaysAgo: 335,
		dueInDays: 30,
		certificate: 'CAL-26-0211',
		resolution_bits: 16
	}
];
