import { formatDay, formatPeriod, formatShortDay } from '../../report/dates';
import type { ReportModel } from '../../report/report-model';
import type { RevisionStatus } from '../../report/revision-status';

const STATUS_WORDS: Record<RevisionStatus, string> = {
	draft: 'DRAFT, not issued',
	'in-check': 'DRAFT, in check',
	returned: 'DRAFT, returned',
	issued: 'issued',
	superseded: 'superseded',
	withdrawn: 'withdrawn'
};

export function isDraft(model: ReportModel): boolean {
	return model.document.issuedAt === null;
}

export function statusWords(model: ReportModel): string {
	const { issuedAt, status } = model.document;
	return issuedAt === null
		? STATUS_WORDS[status]
		: `issued ${formatShortDay(issuedAt, model.practice.timeZone)}`;
}

export function numberWords(model: ReportModel): string {
	return model.document.number ?? 'given at issue';
}

export function measuredWords(model: ReportModel): string {
	const { measuredFrom, measuredTo } = model.survey;
	if (measuredFrom === null || measuredTo === null) return 'not known from the captures';
	return formatPeriod(measuredFrom, measuredTo, model.site.timeZone);
}

export function dayInPractice(model: ReportModel, instant: string | null): string {
	return instant === null ? '–' : formatDay(instant, model.practice.timeZone);
}

export function pointKindWords(model: ReportModel): string {
	return model.point.kind === 'pcc' ? 'point of common coupling' : 'in-plant point';
}

/** First 16 digits in groups of four, as a title block shows a hash. */
export function shortHash(sha256: string): string {
	return (sha256.slice(0, 16).match(/.{4}/g) ?? []).join(' ');
}
