import type {
	CertificateBand,
	InstrumentClass,
	MeasuringChain,
	Resolution,
	Transducer,
	TransducerKind
} from './measuring-chain';

/** A sensor of the recorder as the register knows it. */
export interface SensorInChain {
	kind: TransducerKind;
	/** Percent of reading; null = not known, and then no uncertainty is stated. */
	error_pct: number | null;
	phaseError_deg: number | null;
	highestFrequency_Hz: number | null;
	ratedPrimary_A: number | null;
}

/** What a register or a point file knows of a measuring chain; everything but the frequency may be missing. */
export interface ChainFacts {
	nominalFrequency_Hz: 50 | 60;
	/** Null = not known: class II is taken. */
	instrumentClass: InstrumentClass | null;
	/** Errors of the recorder's own sensors, percent of reading; null = measured directly. */
	voltageSensorError_pct: number | null;
	currentSensorError_pct: number | null;
	voltageSensorKind?: TransducerKind | null;
	currentSensorKind?: TransducerKind | null;
	/** Known sensors count before the two errors above; null = measured directly. */
	voltageSensor?: SensorInChain | null;
	currentSensor?: SensorInChain | null;
	/** Primary value of the measuring range, A, where no transformer is installed. */
	currentRange_A?: number | null;
	/** Transformers installed at the point, by their rated primary values; null = none. */
	voltageTransformerPrimary_V: number | null;
	currentTransformerPrimary_A: number | null;
	voltageTransformerClass?: number | null;
	currentTransformerClass?: number | null;
	voltageTransformerKind?: TransducerKind | null;
	certificate?: CertificateBand[];
	resolution?: Resolution | null;
}

/** Accuracy class that is taken for an installed transformer when nobody stated it. */
const ASSUMED_CLASS = 1;
/** Low voltage ends here (IEC 60038). */
const LOW_VOLTAGE_MOST_V = 1000;

function sensor(error_pct: number | null, kind: TransducerKind | null | undefined): Transducer[] {
	if (error_pct === null) return [];
	return [
		{ role: 'sensor', kind: kind ?? 'not-known', error_pct, errorAssumed: false, ratedPrimary_A: null }
	];
}

/** What is not stated is left out, so that a chain reads as it did before anybody could state it. */
function knownSensor(known: SensorInChain | null): Transducer[] {
	if (known === null) return [];
	const { kind, error_pct, phaseError_deg, highestFrequency_Hz, ratedPrimary_A } = known;
	return [
		{
			role: 'sensor',
			kind,
			error_pct,
			errorAssumed: false,
			ratedPrimary_A,
			...(phaseError_deg === null ? {} : { phaseError_deg }),
			...(highestFrequency_Hz === null ? {} : { highestFrequency_Hz })
		}
	];
}

function transformer(
	kind: TransducerKind,
	stated: number | null | undefined,
	ratedPrimary_A: number | null
): Transducer {
	return {
		role: 'transformer',
		kind,
		error_pct: stated ?? ASSUMED_CLASS,
		errorAssumed: (stated ?? null) === null,
		ratedPrimary_A
	};
}

/** The measuring chain behind a survey. What is not known is taken on the safe side; the statement says so. */
export function chainOf(facts: ChainFacts): MeasuringChain {
	const { voltageTransformerPrimary_V: primary_V, currentTransformerPrimary_A: primary_A } = facts;
	const voltageKind =
		facts.voltageTransformerKind ??
		(primary_V !== null && primary_V > LOW_VOLTAGE_MOST_V
			? 'inductive-voltage-transformer'
			: 'low-voltage-transformer');
	return {
		nominalFrequency_Hz: facts.nominalFrequency_Hz,
		instrumentClass: facts.instrumentClass ?? 'II',
		certificate: facts.certificate ?? [],
		voltageTransducers: [
			...(primary_V === null ? [] : [transformer(voltageKind, facts.voltageTransformerClass, null)]),
			...(facts.voltageSensor === undefined
				? sensor(facts.voltageSensorError_pct, facts.voltageSensorKind)
				: knownSensor(facts.voltageSensor))
		],
		currentTransducers: [
			...(primary_A === null
				? []
				: [transformer('current-transformer', facts.currentTransformerClass, primary_A)]),
			...(facts.currentSensor === undefined
				? sensor(facts.currentSensorError_pct, facts.currentSensorKind)
				: knownSensor(facts.currentSensor))
		],
		currentRange_A: primary_A ?? facts.currentRange_A ?? null,
		resolution: facts.resolution ?? null
	};
}
