import type { DirectionIndication } from '$lib/harmonics/power/direction';

type Indication = DirectionIndication['indication'];
type Reason = DirectionIndication['reason'];

export const INDICATION_WORDS: Record<Indication, string> = {
	'from-network': 'from the network',
	'from-installation': 'from the installation',
	undecided: 'undecided'
};

/** In and out of the installation; neither where the order does not say. */
export const INDICATION_MARKS: Record<Indication, string> = {
	'from-network': '→',
	'from-installation': '←',
	undecided: '○'
};

/** Why, in a few words for a table cell. */
export const REASON_WORDS: Record<Reason, string> = {
	'no-data': 'no data',
	'voltage-too-small': 'voltage within the noise',
	'current-too-small': 'current within the noise',
	'angle-not-known': 'transducers not known at this order',
	'angle-within-uncertainty': 'angle too near to 90°',
	'windows-disagree': 'windows disagree',
	'phases-disagree': 'phases disagree',
	'near-resonance': 'near a resonance',
	'sign-of-power': ''
};
