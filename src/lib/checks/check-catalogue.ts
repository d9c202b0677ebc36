/**
 * Every check that rests on the capture's own signals or columns: the codes of remarks that belong to it, what a reader is
 * told when none was made, and what to do about one that was. Order is the order in which a capture is looked at.
 */
export interface CheckEntry {
	code: string;
	title: string;
	/** Codes of the analysis's remarks that are findings of this check. */
	remarks: readonly string[];
	passes: string;
	advice: string;
	/** Picture that shows it. */
	picture: 'waveform' | 'phasors' | 'voltages' | 'frequency' | 'stretches' | 'rms-and-dc' | null;
	/** What has to be there for the check to say anything. */
	needs: 'channels' | 'voltage-and-current' | 'three-voltages' | 'nominal-voltage';
}

export const SIGNAL_CHECKS: readonly CheckEntry[] = [
	{
		code: 'clipped',
		title: 'Clipping',
		remarks: ['clipped'],
		passes: 'No crest is cut off: no channel holds its extreme value for longer than its wave can.',
		advice: 'Measure again with a larger input range or a clamp of higher rating.',
		picture: 'waveform',
		needs: 'channels'
	},
	{
		code: 'dead-channel',
		title: 'Dead channels',
		remarks: ['dead-channel'],
		passes: 'Every mapped channel carries a signal.',
		advice: 'Check lead, fuse, clamp and mapping; take a channel that was not connected out of the mapping.',
		picture: 'rms-and-dc',
		needs: 'channels'
	},
	{
		code: 'same-signal',
		title: 'Conductors recorded twice',
		remarks: ['same-signal'],
		passes: 'No two channels of one quantity carry the same wave.',
		advice: 'Look at the hook-up: one lead or clamp sits on a conductor that another one measures already.',
		picture: 'phasors',
		needs: 'channels'
	},
	{
		code: 'quantity-swapped',
		title: 'Voltage and current exchanged',
		remarks: ['quantity-swapped'],
		passes: 'Units and levels fit what each channel is mapped as.',
		advice: 'Correct the quantity of the channels in the mapping and analyse again.',
		picture: 'voltages',
		needs: 'channels'
	},
	{
		code: 'swapped-ct',
		title: 'Currents on the right phases',
		remarks: ['swapped-ct', 'connection-doubtful'],
		passes: 'Every current lies by the voltage of its own phase.',
		advice: 'Correct the phases in the mapping, or put the clamps on the right conductors and measure again.',
		picture: 'phasors',
		needs: 'voltage-and-current'
	},
	{
		code: 'reversed-ct',
		title: 'Direction of the current transformers',
		remarks: ['reversed-ct', 'power-flows-out'],
		passes: 'Power flows into the installation on every phase.',
		advice:
			'Mark the channel as reversed in the mapping if the clamp was turned round; overrule this if energy really flows back.',
		picture: 'phasors',
		needs: 'voltage-and-current'
	},
	{
		code: 'negative-rotation',
		title: 'Phase rotation',
		remarks: ['negative-rotation'],
		passes: 'The voltages turn in the order in which the phases are named.',
		advice: 'Exchange two voltages in the mapping, together with their currents.',
		picture: 'phasors',
		needs: 'three-voltages'
	},
	{
		code: 'voltage-far-from-nominal',
		title: 'Voltage against nominal',
		remarks: ['voltage-far-from-nominal'],
		passes: 'Every voltage lies within 20 % of its nominal value, so ratios and units fit.',
		advice:
			'Correct transformer ratio, unit or phase in the mapping, or the nominal voltage of the point, and analyse again.',
		picture: 'voltages',
		needs: 'nominal-voltage'
	},
	{
		code: 'wrong-nominal-frequency',
		title: 'Frequency',
		remarks: ['frequency-out-of-range', 'wrong-nominal-frequency', 'stated-frequency-differs'],
		passes: 'The measured frequency is that of the point.',
		advice: 'Correct the nominal frequency of the point, or check the sampling rate that the file states.',
		picture: 'frequency',
		needs: 'channels'
	},
	{
		code: 'rate-too-low',
		title: 'Sampling rate and highest order',
		remarks: ['rate-too-low', 'little-filter-margin', 'rate-inferred', 'uneven-sampling'],
		passes: 'The sampling rate carries every order up to the 50th, with room for the recorder’s filter.',
		advice:
			'Set the recorder to at least 128 samples per cycle and measure again if the missing orders matter.',
		picture: null,
		needs: 'channels'
	},
	{
		code: 'windows',
		title: 'Windows filled',
		remarks: ['tail-not-used', 'stretches-left-out', 'fundamental-lost'],
		passes: 'The capture is made up of whole 10/12-cycle windows.',
		advice: 'A few cycles at the end are lost at any recorder; record longer where much is lost.',
		picture: 'stretches',
		needs: 'channels'
	},
	{
		code: 'missing-samples',
		title: 'Gaps in the file',
		remarks: ['missing-samples', 'several-stretches'],
		passes: 'The recording runs through without a gap.',
		advice: 'Find out why the recorder stopped; what is missing is not filled in and counts as not measured.',
		picture: 'stretches',
		needs: 'channels'
	},
	{
		code: 'dc-offset',
		title: 'Constant part',
		remarks: ['dc-offset'],
		passes: 'No channel carries a constant part worth mention.',
		advice: 'Zero the clamp or the input. Behind a transformer a constant part cannot come from the network.',
		picture: 'rms-and-dc',
		needs: 'channels'
	}
];

/** Checks of a log's columns that have no waveform behind them. */
export const TREND_CHECK_CODES: readonly string[] = [
	'voltage-far-from-nominal',
	'wrong-nominal-frequency',
	'missing-samples'
];
