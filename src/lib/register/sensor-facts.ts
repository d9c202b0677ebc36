/** What stands between a conductor and the input of an instrument, and belongs to the instrument's case. */
export const SENSOR_KINDS = [
	'current-transformer',
	'clamp',
	'flexible-coil',
	'shunt',
	'voltage-transformer',
	'voltage-lead'
] as const;
export type SensorKind = (typeof SENSOR_KINDS)[number];

export const SECONDARY_UNITS = ['A', 'V', 'mV'] as const;
export type SecondaryUnit = (typeof SECONDARY_UNITS)[number];

export const SENSOR_KIND_WORDS: Record<SensorKind, string> = {
	'current-transformer': 'current transformer',
	clamp: 'clamp',
	'flexible-coil': 'flexible coil',
	shunt: 'shunt',
	'voltage-transformer': 'voltage transformer',
	'voltage-lead': 'voltage lead'
};

/** What a kind of sensor measures. */
export function sensorQuantity(kind: SensorKind): 'voltage' | 'current' {
	return kind === 'voltage-transformer' || kind === 'voltage-lead' ? 'voltage' : 'current';
}

/** Ratio as marked: primary in A (current) or V (voltage), secondary in its own unit. */
export interface MarkedRatio {
	primary: number;
	secondary: number;
	secondaryUnit: SecondaryUnit;
}

export interface SensorFacts {
	name: string;
	kind: SensorKind;
	serialNumber: string;
	/** Null = not known. */
	ratio: MarkedRatio | null;
	/** As marked, e.g. "0.5" or "1"; empty = not stated. */
	accuracyClass: string;
	/** Greatest ratio error, percent of reading; null = not known. */
	ratioError_pct: number | null;
	/** Greatest phase error at power frequency, degrees; null = not known. */
	phaseError_deg: number | null;
	/** Nothing can be said of it above; null = not known. */
	highestFrequency_Hz: number | null;
	notes: string;
}

/** The ratio error that a marked class stands for: "0.5", "0.5S", "cl. 1"; null where the mark holds no figure. */
export function errorOfClass_pct(accuracyClass: string): number | null {
	const figure = /^(?:class|cl\.?|kl\.?)?\s*(\d+(?:[.,]\d+)?)\s*(?:%|s|m)?$/i.exec(accuracyClass.trim())?.[1];
	const error_pct = figure === undefined ? NaN : Number(figure.replace(',', '.'));
	return error_pct > 0 && error_pct <= 20 ? error_pct : null;
}

/** The figure that counts: what was stated, before what the class stands for; null = not known. */
export function sensorError_pct(facts: Pick<SensorFacts, 'ratioError_pct' | 'accuracyClass'>): number | null {
	return facts.ratioError_pct ?? errorOfClass_pct(facts.accuracyClass);
}
