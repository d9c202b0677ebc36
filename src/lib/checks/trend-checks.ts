import { FAR_FROM_NOMINAL } from '../harmonics/quality/levels';
import type { CaptureEvidence } from '../harmonics/quality/capture-evidence';
import type { QualityRemark } from '../harmonics/waveform-analysis';
import { formatPhase } from '../recording/phase';
import { formatOrdinal } from '../units/format';
import type { CaptureCheck } from './capture-check';
import type { CaptureSubject, CheckedPoint } from './capture-subject';

/** A network never strays this far from its nominal frequency for half of a log (EN 50160: −6 % at most; from memory). */
const MOST_FREQUENCY_SHIFT = 0.1;

/** Findings about a log's columns, in the form and by the codes of an analysed waveform's. */
export function trendRemarks(subject: CaptureSubject, point: CheckedPoint): QualityRemark[] {
	const { evidence } = subject;
	if (subject.kind !== 'trend' || evidence === null) return [];
	return [...farVoltages(evidence, point), ...otherFrequency(subject, evidence), ...gaps(evidence)];
}

function farVoltages({ channels }: CaptureEvidence, point: CheckedPoint): QualityRemark[] {
	return channels.flatMap(({ quantity, phase, fundamental, channelIndex }): QualityRemark[] => {
		const nominal = point.nominalVoltages_V[phase];
		if (quantity !== 'voltage' || !nominal || fundamental === null) return [];
		const share = fundamental.rms / nominal;
		if (Math.abs(share - 1) <= FAR_FROM_NOMINAL) return [];
		const root3 = Math.abs(share / Math.sqrt(3) - 1) < 0.08 || Math.abs(share * Math.sqrt(3) - 1) < 0.08;
		return [
			{
				severity: 'blocks',
				code: 'voltage-far-from-nominal',
				channelIndex,
				sentence:
					`The logged voltage of ${formatPhase(phase, point.phaseNames)} is ${fundamental.rms.toPrecision(4)} V for half of the time, ` +
					`${(100 * share).toFixed(1)} % of the nominal ${nominal.toPrecision(4)} V.` +
					(root3
						? ' The factor is √3: a line-to-line voltage is mapped as line-to-neutral or the other way round.'
						: '')
			}
		];
	});
}

function otherFrequency(
	{ nominalFrequency_Hz }: CaptureSubject,
	{ frequency_Hz }: CaptureEvidence
): QualityRemark[] {
	if (frequency_Hz === null || Math.abs(frequency_Hz / nominalFrequency_Hz - 1) <= MOST_FREQUENCY_SHIFT)
		return [];
	return [
		{
			severity: 'blocks',
			code: 'wrong-nominal-frequency',
			channelIndex: null,
			sentence: `The log runs at ${frequency_Hz.toFixed(3)} Hz, the point is entered with ${nominalFrequency_Hz} Hz.`
		}
	];
}

function gaps({ stretchCount, stretches }: CaptureEvidence): QualityRemark[] {
	if (stretchCount <= 1) return [];
	const listed = stretches.slice(1).map((next, i) => next.from_s - stretches[i]!.to_s);
	const lost_s = listed.reduce((sum, gap_s) => sum + gap_s, 0);
	return [
		{
			severity: 'warns',
			code: 'missing-samples',
			channelIndex: null,
			sentence: `The log is broken ${stretchCount - 1} times; ${(lost_s / 3600).toFixed(2)} h are missing${stretchCount > stretches.length ? ' in the first breaks alone' : ''}.`
		}
	];
}

/** Checks that only a log needs: values that cannot be, and columns that are not there. */
export function trendChecks({ kind, evidence }: CaptureSubject, point: CheckedPoint): CaptureCheck[] {
	if (kind !== 'trend' || evidence === null) return [];
	const label = (one: CaptureEvidence['channels'][number]) =>
		`${one.quantity} of ${formatPhase(one.phase, point.phaseNames)}`;
	const impossible = evidence.channels.filter((one) => one.implausible.length > 0);
	const broken = evidence.channels.filter((one) => one.missingOrders.length > 0);
	const highest = Math.min(...evidence.channels.map((one) => one.highestOrder));
	return [
		...(impossible.length === 0
			? [
					{
						code: 'implausible-values',
						title: 'Values that cannot be',
						outcome: 'passes' as const,
						sentence: 'No value lies below zero, and no voltage harmonic above its fundamental.',
						advice: '',
						channelIndex: null,
						evidence: null
					}
				]
			: impossible.map((one) => ({
					code: 'implausible-values',
					title: 'Values that cannot be',
					outcome: 'blocks' as const,
					sentence: `${label(one)}: ${one.implausible.join(' ')}`,
					advice:
						'Check which columns are mapped, their unit (percent or V and A), and the export of the log.',
					channelIndex: one.channelIndex,
					evidence: null
				}))),
		...(broken.length === 0
			? [
					{
						code: 'order-columns',
						title: 'Columns of the orders',
						outcome: 'passes' as const,
						sentence:
							highest >= 2
								? `Every order from the 2nd to the ${formatOrdinal(highest)} has a column.`
								: 'The log holds no orders.',
						advice: '',
						channelIndex: null,
						evidence: null
					}
				]
			: broken.map((one) => ({
					code: 'order-columns',
					title: 'Columns of the orders',
					outcome: 'warns' as const,
					sentence: `${label(one)}: no values of order ${one.missingOrders.join(', ')}; a total that sums them cannot be judged.`,
					advice: 'Export the log with all orders, or map the columns that were left out.',
					channelIndex: one.channelIndex,
					evidence: null
				})))
	];
}
