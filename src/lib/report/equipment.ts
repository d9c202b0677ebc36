import type { CalibrationValidity, CertificateSpan } from '../register/calibration-validity';
import type { SecondaryUnit, SensorKind } from '../register/sensor-facts';

/** Standing of a calibration while something was measured; null where its time is not known. */
export type ReportValidity = CalibrationValidity<CertificateSpan>['state'] | null;

export interface ReportCertificate {
	certificate: string;
	laboratory: string;
	/** Calendar dates, ISO. */
	calibratedOn: string;
	dueOn: string;
}

export interface ReportSensor {
	name: string;
	kind: SensorKind;
	serialNumber: string;
	ratio: { primary: number; secondary: number; secondaryUnit: SecondaryUnit } | null;
	accuracyClass: string;
	ratioError_pct: number | null;
	phaseError_deg: number | null;
	highestFrequency_Hz: number | null;
	certificates: ReportCertificate[];
	/** Worst over the captures. */
	validity: ReportValidity;
}

/** An instrument with all that it measured through, and what it recorded. */
export interface ReportEquipment {
	name: string;
	model: string;
	serialNumber: string;
	harmonicClass: 'I' | 'II' | 'unknown';
	/** In words, where no inputs are listed. */
	channelsInWords: string;
	sensorsInWords: string;
	inputs: {
		name: string;
		quantity: 'voltage' | 'current';
		rangeRms: number | null;
		rangeUnit: 'A' | 'V';
		resolution_bits: number | null;
		/** Name of the sensor; null = measured directly. */
		sensor: string | null;
	}[];
	sensors: ReportSensor[];
	certificates: ReportCertificate[];
	/** Worst over the captures. */
	validity: ReportValidity;
	captures: { name: string; startedAt: string | null; validity: ReportValidity }[];
}

const FROM_WORST: readonly ReportValidity[] = ['expired', 'not-yet', 'none', null, 'valid'];

/** What can be said of all of them; null without any. */
export function worstValidity(states: readonly ReportValidity[]): ReportValidity {
	return FROM_WORST.find((state) => states.includes(state)) ?? null;
}
