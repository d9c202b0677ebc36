import { layOutMail, type MailContent } from './mail-layout';

export interface ReportIssuedMail {
	name: string;
	practiceName: string;
	clientName: string;
	siteName: string;
	title: string;
	/** e.g. "TH-2026-0142". */
	reportNumber: string;
	revision: string;
	/** The verdict in a sentence, as on the report's cover. */
	verdictSentence: string;
	/** Name of the revision this one takes the place of. */
	supersedes: string | null;
	href: string;
}

export function reportIssuedMail(mail: ReportIssuedMail): MailContent {
	const number = `${mail.reportNumber} revision ${mail.revision}`;
	const replaces =
		mail.supersedes === null
			? []
			: [`It takes the place of revision ${mail.supersedes}, which is no longer valid.`];
	return layOutMail({
		subject: `Report ${number}: ${mail.siteName}`,
		from: mail.practiceName,
		heading: mail.title,
		greeting: `Hello ${mail.name},`,
		paragraphs: [`${mail.practiceName} has issued report ${number} for ${mail.siteName}.`, ...replaces],
		facts: [
			{ term: 'Report', value: number },
			{ term: 'For', value: mail.clientName },
			{ term: 'Site', value: mail.siteName },
			{ term: 'Result', value: mail.verdictSentence }
		],
		button: { label: 'Read the report', href: mail.href },
		closing: ['Please acknowledge it on that page once you have read it. Questions can be asked there too.']
	});
}

export interface ReportWithdrawnMail {
	name: string;
	practiceName: string;
	siteName: string;
	reportNumber: string;
	revision: string;
	reason: string;
	href: string;
}

export function reportWithdrawnMail(mail: ReportWithdrawnMail): MailContent {
	const number = `${mail.reportNumber} revision ${mail.revision}`;
	return layOutMail({
		subject: `Withdrawn: report ${number}`,
		from: mail.practiceName,
		heading: `Report ${number} is withdrawn`,
		greeting: `Hello ${mail.name},`,
		paragraphs: [
			`${mail.practiceName} has withdrawn report ${number} for ${mail.siteName}. Please rely on it no longer.`,
			'The reason given:'
		],
		quote: mail.reason,
		button: { label: 'See your reports', href: mail.href }
	});
}

export interface AcknowledgementReceiptMail {
	name: string;
	practiceName: string;
	reportNumber: string;
	revision: string;
	siteName: string;
	typedName: string;
	/** When, in words, with its zone. */
	acknowledgedAt: string;
	pdfSha256: string;
	href: string;
}

export function acknowledgementReceiptMail(mail: AcknowledgementReceiptMail): MailContent {
	const number = `${mail.reportNumber} revision ${mail.revision}`;
	return layOutMail({
		subject: `Acknowledged: report ${number}`,
		from: mail.practiceName,
		heading: 'Receipt of acknowledgement',
		greeting: `Hello ${mail.name},`,
		paragraphs: [
			'This confirms that the report named below was received and read. Keep it with your records.'
		],
		facts: [
			{ term: 'Report', value: number },
			{ term: 'Site', value: mail.siteName },
			{ term: 'Acknowledged by', value: mail.typedName },
			{ term: 'At', value: mail.acknowledgedAt },
			{ term: 'SHA-256 of the PDF', value: mail.pdfSha256 }
		],
		button: { label: 'Open the report', href: mail.href }
	});
}

export interface QueryMail {
	name: string;
	practiceName: string;
	reportNumber: string;
	revision: string;
	siteName: string;
	/** Who asks or answers. */
	author: string;
	body: string;
	href: string;
}

export function newQueryMail(mail: QueryMail): MailContent {
	const number = `${mail.reportNumber} revision ${mail.revision}`;
	return layOutMail({
		subject: `Question about report ${number}`,
		from: mail.practiceName,
		heading: `A question about ${mail.siteName}`,
		greeting: `Hello ${mail.name},`,
		paragraphs: [`${mail.author} asks about report ${number}:`],
		quote: mail.body,
		button: { label: 'Answer the question', href: mail.href }
	});
}

export function queryAnswerMail(mail: QueryMail): MailContent {
	const number = `${mail.reportNumber} revision ${mail.revision}`;
	return layOutMail({
		subject: `Answer to your question about report ${number}`,
		from: mail.practiceName,
		heading: `Your question about ${mail.siteName}`,
		greeting: `Hello ${mail.name},`,
		paragraphs: [`${mail.author} of ${mail.practiceName} answers your question about report ${number}:`],
		quote: mail.body,
		button: { label: 'Read it beside the report', href: mail.href }
	});
}
