import nodemailer from 'nodemailer';
import type { Config } from '../config';
import type { MailTransport } from './outbox';

/**
 * SMTP through nodemailer; without SMTP settings a local fake that accepts everything: the message stays in the
 * outbox table, where the demo's mailbox page shows it.
 */
export function createMailTransport(config: Pick<Config, 'smtpUrl' | 'mailFrom'>): MailTransport {
	if (config.smtpUrl === null) return async () => undefined;
	const smtp = nodemailer.createTransport(config.smtpUrl);
	return async (mail) => {
		await smtp.sendMail({
			from: config.mailFrom,
			to: mail.to_name ? { name: mail.to_name, address: mail.to_email } : mail.to_email,
			subject: mail.subject,
			text: mail.text,
			html: mail.html,
			// Names the message to the receiving side, so that a repeated delivery can be told apart.
			messageId: `<${mail.id}@sinewright>`
		});
	};
}
