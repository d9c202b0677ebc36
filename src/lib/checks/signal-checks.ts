import { FAR_FROM_NOMINAL } from '../harmonics/quality/levels';
import type { CaptureEvidence, ChannelEvidence } from '../harmonics/quality/capture-evidence';
import type { QualityRemark } from '../harmonics/waveform-analysis';
import { formatPhase } from '../recording/phase';
import type { CaptureCheck, CheckEvidence } from './capture-check';
import type { CaptureSubject, CheckedPoint } from './capture-subject';
import { SIGNAL_CHECKS, TREND_CHECK_CODES, type CheckEntry } from './check-catalogue';

/**
 * The catalogue's checks: each remark of the analysis is a finding of the check it belongs to; a check without a finding
 * passes, or says that it could not be made. What belongs to none stands at the end.
 */
export function signalChecks(subject: CaptureSubject, point: CheckedPoint): CaptureCheck[] {
	const entries =
		subject.kind === 'trend'
			? SIGNAL_CHECKS.filter(({ code }) => TREND_CHECK_CODES.includes(code))
			: SIGNAL_CHECKS;
	const known = new Set(SIGNAL_CHECKS.flatMap((entry) => entry.remarks));
	return [
		...entries.flatMap((entry) => {
			const found = subject.remarks.filter(({ code }) => entry.remarks.includes(code));
			return found.length === 0
				? [withoutFinding(entry, subject, point)]
				: found.map((remark) => finding(entry, remark, subject, point));
		}),
		...subject.remarks.filter(({ code }) => !known.has(code)).map(furtherRemark)
	];
}

function finding(
	entry: CheckEntry,
	remark: QualityRemark,
	subject: CaptureSubject,
	point: CheckedPoint
): CaptureCheck {
	return {
		code: remark.code,
		title: entry.title,
		outcome: remark.severity,
		sentence: remark.sentence,
		advice: entry.advice,
		channelIndex: remark.channelIndex,
		evidence: subject.evidence && pictureOf(entry, subject, subject.evidence, point, remark.channelIndex)
	};
}

function withoutFinding(entry: CheckEntry, subject: CaptureSubject, point: CheckedPoint): CaptureCheck {
	const { evidence } = subject;
	const lacking = whatIsLacking(entry, evidence, point);
	return {
		code: entry.code,
		title: entry.title,
		outcome: lacking === null ? 'passes' : 'not-checked',
		sentence: lacking ?? entry.passes,
		advice: '',
		channelIndex: null,
		evidence: lacking === null && evidence ? pictureOf(entry, subject, evidence, point, null) : null
	};
}

function whatIsLacking(
	{ needs }: CheckEntry,
	evidence: CaptureEvidence | null,
	point: CheckedPoint
): string | null {
	if (evidence === null) return 'This capture was analysed before this check was kept. Analyse it again.';
	const has = (quantity: 'voltage' | 'current') =>
		evidence.channels.some((channel) => channel.quantity === quantity && channel.phase !== 'N');
	if (needs === 'voltage-and-current' && !(has('voltage') && has('current')))
		return 'It takes a voltage and a current of one phase to check this.';
	if (needs === 'three-voltages' && evidence.channels.filter((c) => c.quantity === 'voltage').length < 3)
		return 'It takes three voltages to check this.';
	if (needs === 'nominal-voltage') {
		if (!has('voltage')) return 'No voltage is mapped.';
		if (Object.keys(point.nominalVoltages_V).length === 0) return 'The nominal voltage is not known.';
	}
	return null;
}

function pictureOf(
	{ picture }: CheckEntry,
	subject: CaptureSubject,
	evidence: CaptureEvidence,
	point: CheckedPoint,
	channelIndex: number | null
): CheckEvidence | null {
	switch (picture) {
		case 'waveform':
			return waveformPicture(evidence, channelIndex);
		case 'phasors':
			return phasorPicture(evidence, point);
		case 'voltages':
			return voltagePicture(evidence, point);
		case 'frequency':
			return frequencyPicture(subject, evidence);
		case 'stretches':
			return stretchPicture(subject, evidence, point);
		case 'rms-and-dc':
			return levelPicture(evidence, channelIndex);
		case null:
			return null;
	}
}

/** Two cycles; what rests at the extreme of the excerpt for three points and more is marked. */
function waveformPicture(evidence: CaptureEvidence, channelIndex: number | null): CheckEvidence | null {
	const channel =
		evidence.channels.find((one) => one.channelIndex === channelIndex) ??
		(channelIndex === null ? evidence.channels[0] : undefined);
	if (!channel?.excerpt) return null;
	const { from_s, step_s, values } = channel.excerpt;
	return {
		kind: 'waveform',
		label: channel.name,
		quantity: channel.quantity,
		phase: channel.phase,
		from_s,
		step_s,
		values,
		marked: channelIndex === null ? [] : flatRuns(values, from_s, step_s)
	};
}

function flatRuns(values: readonly (number | null)[], from_s: number, step_s: number) {
	const present = values.filter((value) => value !== null);
	const extremes = [Math.max(...present), Math.min(...present)];
	const runs: { from_s: number; to_s: number; label: string }[] = [];
	let begin = 0;
	for (let i = 1; i <= values.length; i++) {
		if (i < values.length && values[i] === values[begin]) continue;
		const value = values[begin];
		if (i - begin >= 3 && value !== null && value !== undefined && extremes.includes(value))
			runs.push({ from_s: from_s + begin * step_s, to_s: from_s + (i - 1) * step_s, label: 'flat' });
		begin = i;
	}
	return runs;
}

function phasorPicture({ channels }: CaptureEvidence, point: CheckedPoint): CheckEvidence | null {
	const vectors = channels.flatMap(({ quantity, phase, fundamental }) =>
		fundamental === null || fundamental.phase_deg === null || phase === 'N'
			? []
			: [
					{
						label: `${quantity === 'voltage' ? 'U' : 'I'} ${formatPhase(phase, point.phaseNames)}`,
						quantity,
						phase,
						rms: fundamental.rms,
						phase_deg: fundamental.phase_deg
					}
				]
	);
	return vectors.length === 0 ? null : { kind: 'phasors', vectors };
}

function voltagePicture({ channels }: CaptureEvidence, point: CheckedPoint): CheckEvidence | null {
	const bars = channels.flatMap((channel) => {
		const nominal = point.nominalVoltages_V[channel.phase];
		if (channel.quantity !== 'voltage' || !channel.fundamental || nominal === undefined) return [];
		return [
			{
				label: labelOf(channel, point),
				measured: channel.fundamental.rms,
				expected: nominal,
				low: (1 - FAR_FROM_NOMINAL) * nominal,
				high: (1 + FAR_FROM_NOMINAL) * nominal
			}
		];
	});
	return bars.length === 0 ? null : { kind: 'levels', axis: 'Fundamental voltage, V', bars };
}

function frequencyPicture(subject: CaptureSubject, evidence: CaptureEvidence): CheckEvidence | null {
	if (evidence.frequency_Hz === null) return null;
	const nominal = subject.nominalFrequency_Hz;
	return {
		kind: 'levels',
		axis: 'Frequency, Hz',
		bars: [
			{
				label: 'measured',
				measured: evidence.frequency_Hz,
				expected: nominal,
				low: 0.85 * nominal,
				high: 1.15 * nominal
			},
			...(evidence.statedFrequency_Hz === null
				? []
				: [
						{
							label: 'stated by the file',
							measured: evidence.statedFrequency_Hz,
							expected: nominal,
							low: null,
							high: null
						}
					])
		]
	};
}

function stretchPicture(
	subject: CaptureSubject,
	{ stretches }: CaptureEvidence,
	point: CheckedPoint
): CheckEvidence | null {
	if (stretches.length === 0) return null;
	const at = (time_s: number) => subject.start_ms + 1000 * time_s;
	const gaps = stretches.slice(1).flatMap((next, i) => {
		const before = stretches[i]!;
		return next.from_s > before.to_s ? [{ from_s: before.to_s, to_s: next.from_s }] : [];
	});
	return {
		kind: 'spans',
		timeZone: point.timeZone,
		spans: [
			...stretches.map(({ from_s, to_s }) => ({
				row: 'recorded',
				from_ms: at(from_s),
				to_ms: at(to_s),
				label: 'recorded',
				tone: 'plain' as const
			})),
			...gaps.map(({ from_s, to_s }) => ({
				row: 'missing',
				from_ms: at(from_s),
				to_ms: at(to_s),
				label: 'gap',
				tone: 'bad' as const
			}))
		],
		marks: []
	};
}

function levelPicture(evidence: CaptureEvidence, channelIndex: number | null): CheckEvidence | null {
	const asked = evidence.channels.find((one) => one.channelIndex === channelIndex);
	const shown = evidence.channels.filter((one) => !asked || one.quantity === asked.quantity);
	const quantity = asked?.quantity ?? shown[0]?.quantity;
	const unit = quantity === 'voltage' ? 'V' : 'A';
	const bars = shown
		.filter((one) => one.quantity === quantity)
		.flatMap(({ name, rms, dc }) => [
			...(rms === null ? [] : [{ label: `${name} rms`, measured: rms }]),
			...(dc === null ? [] : [{ label: `${name} dc`, measured: Math.abs(dc) }])
		])
		.map((bar) => ({ ...bar, expected: null, low: null, high: null }));
	return bars.length === 0
		? null
		: { kind: 'levels', axis: `rms and size of the constant part, ${unit}`, bars };
}

function labelOf({ quantity, phase }: ChannelEvidence, point: CheckedPoint): string {
	return `${quantity === 'voltage' ? 'U' : 'I'} ${formatPhase(phase, point.phaseNames)}`;
}

const FURTHER_TITLES: Readonly<Record<string, string>> = {
	dip: 'Dips',
	swell: 'Swells',
	interruption: 'Interruptions',
	'more-events': 'Dips, swells and interruptions',
	'events-not-checked': 'Dips, swells and interruptions',
	'trend-column': 'Columns of the log'
};

function furtherRemark({ code, severity, sentence, channelIndex }: QualityRemark): CaptureCheck {
	return {
		code,
		title: FURTHER_TITLES[code] ?? 'Further remark of the analysis',
		outcome: code === 'events-not-checked' ? 'not-checked' : severity,
		sentence,
		advice: '',
		channelIndex,
		evidence: null
	};
}
