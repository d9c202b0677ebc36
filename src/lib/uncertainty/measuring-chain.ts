/** Harmonic accuracy class of the recorder (IEC 61000-4-7:2002+A1:2008, table 1). */
export type InstrumentClass = 'I' | 'II';

export type Quantity = 'voltage' | 'current';

/** What stands between the conductor and the recorder. */
export const TRANSDUCER_KINDS = [
	'inductive-voltage-transformer',
	'capacitive-voltage-transformer',
	'low-voltage-transformer',
	'voltage-divider',
	'current-transformer',
	'current-clamp',
	'flexible-coil',
	'shunt',
	'not-known'
] as const;
export type TransducerKind = (typeof TRANSDUCER_KINDS)[number];

/** A transformer or sensor of the chain. Without any, a quantity is measured directly. */
export interface Transducer {
	/** `transformer`: installed at the point; `sensor`: belongs to the recorder. */
	role: 'transformer' | 'sensor';
	kind: TransducerKind;
	/** Greatest ratio error at power frequency and rated load, percent of reading: the class. Null = not known. */
	error_pct: number | null;
	/** True when nobody stated the error and this one is taken instead. */
	errorAssumed: boolean;
	/** Rated primary current of a current transformer, A; null when not known or not a matter of current. */
	ratedPrimary_A: number | null;
	/** Greatest phase error at power frequency, degrees, where it was stated; else it follows from the class. */
	phaseError_deg?: number | null;
	/** Nothing is known of it above, where that was stated. */
	highestFrequency_Hz?: number | null;
}

/** What a calibration certificate says about orders from … to of one quantity. */
export interface CertificateBand {
	quantity: Quantity;
	fromOrder: number;
	toOrder: number;
	/** Expanded uncertainty as printed, percent of reading. */
	expanded_pctOfReading: number;
	coverageFactor: number;
}

/** How finely the samples were written down. */
export interface Resolution {
	/** Least step of the recorded values on the primary side, V and A; null when not known. */
	step_V: number | null;
	step_A: number | null;
	/** Samples in a window of 10 or 12 cycles. */
	samplesPerWindow: number;
	/** Windows behind one judged value: 1 for a window, 15 for three seconds, 3000 for ten minutes at 50 Hz. */
	windowsPerValue: number;
}

/** All that is known of a measuring chain. Plain data: it is kept with every assessment. */
export interface MeasuringChain {
	nominalFrequency_Hz: 50 | 60;
	instrumentClass: InstrumentClass;
	/** Orders that no band covers are taken by the class. */
	certificate: CertificateBand[];
	/** From the conductor to the recorder. */
	voltageTransducers: Transducer[];
	currentTransducers: Transducer[];
	/** Nominal primary current of the measuring range, A; null = not known, no floor is then counted. */
	currentRange_A: number | null;
	/** Null when not known: quantisation is then left to the recorder's class. */
	resolution: Resolution | null;
}

export function transducersOf(chain: MeasuringChain, quantity: Quantity): Transducer[] {
	return quantity === 'voltage' ? chain.voltageTransducers : chain.currentTransducers;
}
