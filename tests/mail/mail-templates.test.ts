import { describe, expect, it } from 'vitest';
import {
	invitationMail,
	passwordChangedMail,
	passwordResetMail,
	signInLinkMail
} from '$lib/server/mail/templates/account-mails';
import {
	acknowledgementReceiptMail,
	newQueryMail,
	queryAnswerMail,
	reportIssuedMail,
	reportWithdrawnMail
} from '$lib/server/mail/templates/report-mails';

const HOSTILE = '<img src=x onerror="alert(1)"> & \'Co\'\r\nBcc: everybody@example.com';
const href = 'https://pq.example/go?a=1&b="2"';
const report = {
	name: HOSTILE,
	practiceName: HOSTILE,
	clientName: HOSTILE,
	siteName: HOSTILE,
	reportNumber: 'TH-2026-0142',
	revision: 'A',
	href
};
const mails = {
	'sign-in link': signInLinkMail({ name: HOSTILE, href, validFor_min: 15 }),
	'password reset': passwordResetMail({ name: HOSTILE, href, validFor_min: 60 }),
	'password changed': passwordChangedMail({ name: HOSTILE, when: HOSTILE, resetHref: href }),
	invitation: invitationMail({
		name: HOSTILE,
		invitedBy: HOSTILE,
		practiceName: HOSTILE,
		role: 'client',
		clientName: HOSTILE,
		href,
		validFor_days: 7
	}),
	'report issued': reportIssuedMail({
		...report,
		title: HOSTILE,
		verdictSentence: HOSTILE,
		supersedes: null
	}),
	'report withdrawn': reportWithdrawnMail({ ...report, reason: HOSTILE }),
	receipt: acknowledgementReceiptMail({
		...report,
		typedName: HOSTILE,
		acknowledgedAt: HOSTILE,
		pdfSha256: 'ab12'
	}),
	question: newQueryMail({ ...report, author: HOSTILE, body: HOSTILE }),
	answer: queryAnswerMail({ ...report, author: HOSTILE, body: HOSTILE })
};

describe.each(Object.entries(mails))('mail: %s', (_name, mail) => {
	it('shows markup in names and texts as text', () => {
		expect(mail.html).not.toMatch(/<img/i);
		expect(mail.html).toContain('&lt;img src=x onerror=&quot;alert(1)&quot;&gt; &amp; &#39;Co&#39;');
	});

	it('cannot be broken out of by the address of its button', () => {
		expect(mail.html).toContain('href="https://pq.example/go?a=1&amp;b=&quot;2&quot;"');
	});

	it('keeps its subject on one line', () => {
		expect(mail.subject).not.toMatch(/[\r\n]/);
	});

	it('says the same in plain text: the address is there in full', () => {
		expect(mail.text).toContain(href);
		expect(mail.text).not.toMatch(/&amp;|<p/);
	});

	it('loads nothing from elsewhere', () => {
		expect(mail.html).not.toMatch(/<(link|script|style)\b|url\(|\bsrc="/i);
	});
});

describe('report mails', () => {
	it('name the revision that is no longer valid', () => {
		const mail = reportIssuedMail({
			...report,
			title: 'T',
			verdictSentence: 'V',
			supersedes: 'A',
			revision: 'B'
		});
		expect(mail.text).toContain('It takes the place of revision A');
		expect(mails['report issued'].text).not.toContain('takes the place');
	});

	it('carry the hash of what was acknowledged', () => {
		expect(mails.receipt.text).toContain('SHA-256 of the PDF: ab12');
	});
});
