import type { MeasuringChain } from '../../src/lib/uncertainty/measuring-chain';
import { chainOf } from '../../src/lib/uncertainty/survey-chain';

const RESOLUTION = {
	// Twelve bits over ±500 V and ±1500 A.
	step_V: 1000 / 4096,
	step_A: 3000 / 4096,
	samplesPerWindow: 1536,
	windowsPerValue: 3
};

/** A calibrated recorder on flexible coils: no source of error outweighs the others by much. */
export const CERTIFIED_CHAIN: MeasuringChain = chainOf({
	nominalFrequency_Hz: 50,
	instrumentClass: 'I',
	voltageSensorError_pct: null,
	currentSensorError_pct: 0.5,
	currentSensorKind: 'flexible-coil',
	voltageTransformerPrimary_V: null,
	currentTransformerPrimary_A: null,
	certificate: (['voltage', 'current'] as const).flatMap((quantity) => [
		{ quantity, fromOrder: 1, toOrder: 10, expanded_pctOfReading: 0.6, coverageFactor: 2 },
		{ quantity, fromOrder: 11, toOrder: 25, expanded_pctOfReading: 1, coverageFactor: 2 },
		{ quantity, fromOrder: 26, toOrder: 50, expanded_pctOfReading: 1.6, coverageFactor: 2 }
	]),
	resolution: RESOLUTION
});

/** A recorder of which nothing but its class is known, on installed current transformers. */
export const CLASS_CHAIN: MeasuringChain = chainOf({
	nominalFrequency_Hz: 50,
	instrumentClass: 'I',
	voltageSensorError_pct: null,
	currentSensorError_pct: null,
	voltageTransformerPrimary_V: null,
	currentTransformerPrimary_A: 800,
	currentTransformerClass: 0.5,
	resolution: RESOLUTION
});

export const CERTIFIED_SIMULATION = { chain: CERTIFIED_CHAIN, captures: 1000, seed: 20_000 };
/** Fewer captures do: a share of practically all is not told any better by more. */
export const CLASS_SIMULATION = { chain: CLASS_CHAIN, captures: 200, seed: 30_000 };
