import type { Contribution, ContributionSource } from './contribution';

/** Each source of error as it is named in a budget, with where its size comes from. */
export const SOURCE_WORDS: Record<ContributionSource, { name: string; note: string }> = {
	'instrument-class': {
		name: 'Recorder, class limit',
		note: 'IEC 61000-4-7:2002+A1:2008, table 1 (from memory): 5 % of reading, or the floor of the class where that is more. Only a bound: rectangular.'
	},
	'instrument-certificate': {
		name: 'Recorder, calibration certificate',
		note: 'Expanded uncertainty and coverage factor as printed on the certificate; drift since then is not counted.'
	},
	'transformer-ratio': {
		name: 'Instrument transformer, class',
		note: 'IEC 61869-2 and -3, IEEE C57.13: ratio error at power frequency, for currents at the load that flowed.'
	},
	'transformer-response': {
		name: 'Instrument transformer, higher orders',
		note: 'Grows from nothing at the 1st order to a few percent at the 50th: common practice, assumption of this product.'
	},
	'transformer-beyond-reach': {
		name: 'Instrument transformer, orders beyond its reach',
		note: 'Orders it is not known to carry, counted with an error of 100 % each: assumption of this product.'
	},
	'sensor-ratio': {
		name: 'Sensor of the recorder, class',
		note: 'Ratio error at power frequency as the data sheet states it.'
	},
	'sensor-response': {
		name: 'Sensor of the recorder, higher orders',
		note: 'Grows from nothing at the 1st order to a few percent at the 50th: common practice, assumption of this product.'
	},
	'sensor-beyond-reach': {
		name: 'Sensor of the recorder, orders beyond its reach',
		note: 'Orders it is not known to carry, counted with an error of 100 % each: assumption of this product.'
	},
	basis: {
		name: 'Measured fundamental',
		note: 'IEC 61000-4-30:2015, 5.2.2 (from memory): 0.1 % in class A, 0.5 % in class S. A declared voltage or demand current is exact by agreement.'
	},
	quantisation: {
		name: 'Rounding of the samples',
		note: 'Step ÷ √12 as white noise, spread over the lines of a window and averaged over the windows.'
	},
	'window-noise': {
		name: 'Noise between neighbouring values',
		note: 'Standard deviation from the differences of neighbouring values; what truly changed between them counts as well.'
	},
	'missing-intervals': {
		name: 'Intervals not measured',
		note: 'Half the distance between the values one standard deviation of rank apart, times the root of the share that is missing.'
	},
	'instrument-angle': {
		name: 'Recorder, between its channels',
		note: 'IEC 61000-4-7 (from memory): 1° per order between two channels in class I. Class II states nothing; twice that is an assumption of this product.'
	},
	'voltage-transformer-angle': {
		name: 'Voltage transformer, phase displacement',
		note: 'Class after IEC 61869-3, IEEE C57.13 (from memory) at power frequency, and as much more for each further order: common practice, assumption of this product.'
	},
	'current-transformer-angle': {
		name: 'Current transformer, phase displacement',
		note: 'Class after IEC 61869-2, IEEE C57.13 at power frequency and the load that flowed; for each further order as much more as at rated load: common practice, assumption of this product.'
	},
	'voltage-sensor-angle': {
		name: 'Voltage sensor of the recorder, phase displacement',
		note: 'As a voltage transformer of the same ratio error (40 minutes for 1 %), and as much more for each further order: assumption of this product. The data sheet prevails.'
	},
	'current-sensor-angle': {
		name: 'Current sensor of the recorder, phase displacement',
		note: 'As a current transformer of the same ratio error at rated load (60 minutes for 1 %), and as much more for each further order: assumption of this product. The data sheet prevails.'
	}
};

/** "normal, k = 2", "rectangular", "observed, 14 degrees of freedom". */
export function distributionWords({ type, distribution, divisor, degreesOfFreedom }: Contribution): string {
	if (type === 'A') {
		const whole = Math.floor(degreesOfFreedom ?? Infinity);
		return `type A, ${whole} ${whole === 1 ? 'degree' : 'degrees'} of freedom`;
	}
	return distribution === 'normal' && divisor !== 1
		? `normal, k = ${Number(divisor.toFixed(2))}`
		: distribution;
}
