/** Instruments and sensors are one area with two lists. */
export function registerViews(current: 'instruments' | 'sensors') {
	return [
		{ href: '/instruments', label: 'Instruments', current: current === 'instruments' },
		{ href: '/instruments/sensors', label: 'Sensors', current: current === 'sensors' }
	];
}
