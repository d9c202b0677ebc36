import type { InputFacts } from '../../src/lib/register/instrument-facts';
import type { SensorFacts } from '../../src/lib/register/sensor-facts';

export interface DemoSensor {
	facts: SensorFacts;
	calibratedDaysAgo: number;
	dueInDays: number;
	certificate: string;
}

function splitCore(letter: string, serial: number): DemoSensor {
	return {
		facts: {
			name: `Split core 2${letter}`,
			kind: 'clamp',
			serialNumber: `SC-${serial}`,
			ratio: { primary: 2000, secondary: 2, secondaryUnit: 'V' },
			accuracyClass: '0.5',
			ratioError_pct: 0.5,
			phaseError_deg: 0.5,
			highestFrequency_Hz: 10_000,
			notes: ''
		},
		calibratedDaysAgo: 262,
		dueInDays: 105,
		certificate: `CAL-26-${serial}`
	};
}

function coil(letter: string, serial: number): DemoSensor {
	return {
		facts: {
			name: `Coil 5${letter}`,
			kind: 'flexible-coil',
			serialNumber: `FC-${serial}`,
			ratio: { primary: 3000, secondary: 3, secondaryUnit: 'V' },
			accuracyClass: '1',
			ratioError_pct: 1,
			phaseError_deg: null,
			highestFrequency_Hz: 20_000,
			notes: ''
		},
		calibratedDaysAgo: 335,
		dueInDays: 75,
		certificate: `CAL-26-${serial}`
	};
}

/** In the order of the inputs that they are plugged into; the last one lies in the cupboard. */
export const SENSORS = {
	recorder2: [splitCore('A', 1189), splitCore('B', 1190), splitCore('C', 1191), splitCore('N', 1192)],
	recorder5: [coil('A', 212), coil('B', 213), coil('C', 214), coil('N', 215)],
	spare: [
		{
			facts: {
				name: 'Clamp 200',
				kind: 'clamp',
				serialNumber: 'CL-0088',
				ratio: { primary: 200, secondary: 2, secondaryUnit: 'V' },
				accuracyClass: '1',
				ratioError_pct: 1,
				phaseError_deg: 1.5,
				highestFrequency_Hz: 5000,
				notes: 'For secondary circuits. Jaw checked, insulation sound.'
			},
			calibratedDaysAgo: 390,
			dueInDays: -25,
			certificate: 'CAL-25-0904'
		}
	]
} satisfies Record<string, DemoSensor[]>;

/** Four voltages and four currents, named as the recorders write them. */
export function demoInputs(resolution_bits: number, sensorIds: readonly string[]): InputFacts[] {
	const conductors = ['1', '2', '3', 'N'];
	return [
		...conductors.map((conductor): InputFacts => ({
			name: `U${conductor}`,
			quantity: 'voltage',
			rangeRms: 1000,
			rangeUnit: 'V',
			resolution_bits,
			sensorId: null
		})),
		...conductors.map((conductor, i): InputFacts => ({
			name: `I${conductor}`,
			quantity: 'current',
			rangeRms: 3,
			rangeUnit: 'V',
			resolution_bits,
			sensorId: sensorIds[i] ?? null
		}))
	];
}
