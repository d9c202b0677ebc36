import { escapeHtml } from './escape-html';

/** What a template gives back; the outbox adds to whom it goes. */
export interface MailContent {
	subject: string;
	text: string;
	html: string;
}

/** One mail as plain data. Every string is text: the layout escapes all of them. */
export interface MailDraft {
	subject: string;
	/** Line over the rule, e.g. the practice's name. */
	from: string;
	heading: string;
	greeting?: string;
	paragraphs: readonly string[];
	/** Ruled facts, like the title block on a sheet. */
	facts?: readonly { term: string; value: string }[];
	quote?: string;
	button?: { label: string; href: string };
	/** After the button: validity of a link, what to do if it was not asked for. */
	closing?: readonly string[];
}

// Mail programs know neither our style sheet nor variables: the light palette's values, inline.
const PAPER = '#F6F3EC';
const SHEET = '#FFFFFF';
const RULE = '#DCD5C7';
const INK = '#17202B';
const INK_SOFT = '#4B5766';
const COPPER = '#A24A21';
const COPPER_DEEP = '#7A3516';
const FONT = "'IBM Plex Sans',-apple-system,'Segoe UI',Helvetica,Arial,sans-serif";

/** Subject lines are one line: a line break in a name must not become a header. */
function oneLine(text: string): string {
	return text.replace(/\s+/g, ' ').trim();
}

function paragraph(text: string, colour = INK, size_px = 16): string {
	return `<p style="margin:0 0 14px;font-size:${size_px}px;line-height:1.5;color:${colour}">${escapeHtml(text).replace(/\n/g, '<br>')}</p>`;
}

function factsTable(facts: readonly { term: string; value: string }[]): string {
	const rows = facts.map(
		({ term, value }) =>
			`<tr><td style="padding:7px 12px;border-bottom:1px solid ${RULE};font-size:13px;color:${INK_SOFT};white-space:nowrap;vertical-align:top">${escapeHtml(term)}</td>` +
			`<td style="padding:7px 12px;border-bottom:1px solid ${RULE};font-size:15px;color:${INK}">${escapeHtml(value)}</td></tr>`
	);
	return `<table role="presentation" cellpadding="0" cellspacing="0" width="100%" style="border:1px solid ${INK};border-collapse:collapse;margin:4px 0 18px">${rows.join('')}</table>`;
}

function buttonRow(button: { label: string; href: string }): string {
	const href = escapeHtml(button.href);
	return (
		`<p style="margin:20px 0"><a href="${href}" style="display:inline-block;padding:11px 20px;background:${COPPER};color:#FFFFFF;font-size:16px;font-weight:500;text-decoration:none">${escapeHtml(button.label)}</a></p>` +
		`<p style="margin:0 0 18px;font-size:13px;line-height:1.5;color:${INK_SOFT}">If the button does not open, copy this address into your browser:<br><a href="${href}" style="color:${COPPER_DEEP};word-break:break-all">${href}</a></p>`
	);
}

function htmlOf(draft: MailDraft): string {
	const parts = [
		`<h1 style="margin:0 0 16px;font-size:22px;line-height:1.3;font-weight:600;color:${INK}">${escapeHtml(draft.heading)}</h1>`,
		draft.greeting ? paragraph(draft.greeting) : '',
		...draft.paragraphs.map((text) => paragraph(text)),
		draft.facts ? factsTable(draft.facts) : '',
		draft.quote
			? `<div style="margin:0 0 18px;padding:2px 0 2px 14px;border-left:3px solid ${COPPER}">${paragraph(draft.quote)}</div>`
			: '',
		draft.button ? buttonRow(draft.button) : '',
		...(draft.closing ?? []).map((text) => paragraph(text, INK_SOFT, 13))
	];
	return (
		`<!doctype html><html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width, initial-scale=1"><title>${escapeHtml(oneLine(draft.subject))}</title></head>` +
		`<body style="margin:0;padding:0;background:${PAPER};font-family:${FONT}">` +
		`<table role="presentation" cellpadding="0" cellspacing="0" width="100%" style="background:${PAPER}"><tr><td align="center" style="padding:28px 12px">` +
		`<table role="presentation" cellpadding="0" cellspacing="0" width="100%" style="max-width:600px;background:${SHEET};border:1px solid ${RULE}">` +
		`<tr><td style="padding:16px 28px;border-bottom:1px solid ${INK};font-size:15px;font-weight:600;color:${INK}">${escapeHtml(draft.from)}</td></tr>` +
		`<tr><td style="padding:26px 28px 14px">${parts.join('')}</td></tr>` +
		`<tr><td style="padding:14px 28px;border-top:1px solid ${RULE};font-size:12px;color:${INK_SOFT}">Sent by Sinewright for ${escapeHtml(draft.from)}.</td></tr>` +
		`</table></td></tr></table></body></html>`
	);
}

function textOf(draft: MailDraft): string {
	const facts = draft.facts?.map(({ term, value }) => `${term}: ${oneLine(value)}`).join('\n');
	const quote = draft.quote
		?.split('\n')
		.map((line) => `> ${line}`)
		.join('\n');
	const parts = [
		draft.heading,
		draft.greeting,
		...draft.paragraphs,
		facts,
		quote,
		draft.button ? `${draft.button.label}:\n${draft.button.href}` : undefined,
		...(draft.closing ?? []),
		`--\nSent by Sinewright for ${oneLine(draft.from)}.`
	];
	return parts.filter((part) => part !== undefined && part !== '').join('\n\n') + '\n';
}

/** One draft, two bodies: nobody reads a mail that says less in plain text. */
export function layOutMail(draft: MailDraft): MailContent {
	return { subject: oneLine(draft.subject), text: textOf(draft), html: htmlOf(draft) };
}
