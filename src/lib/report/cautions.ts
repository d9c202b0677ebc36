/** The usual cautions of work at live switchboards (common practice of the trade), wherever work is asked for. */
export const SITE_CAUTIONS: readonly string[] = [
	'Work on or near live parts is for qualified persons only. Isolate first; where that is not possible, keep to the arc-flash boundary and wear the protective equipment that the site’s study calls for.',
	'Never open the secondary circuit of an energised current transformer: short it before anything is disconnected.',
	'Use voltage leads, clamps and instruments of the measurement category that the place of connection demands.',
	'Capacitors stay charged after isolation. Wait for the discharge time on the nameplate, prove them dead, and short them before touching.'
];

export const REMEDY_CAUTION =
	'Every remedy named here is preliminary. A licensed engineer designs and verifies it under the local code and the utility’s rules before anything is ordered, connected, moved or switched.';

/** Where the limits bind, and what an in-plant comparison is worth. */
export const ADVISORY_STATEMENT =
	'The point lies inside the plant. Limits of this kind bind at the point of common coupling; the comparison is therefore advisory and no statement of compliance.';
