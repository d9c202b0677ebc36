import type { Role } from '../../../access/access';
import { layOutMail, type MailContent } from './mail-layout';

export interface SignInLinkMail {
	name: string;
	href: string;
	validFor_min: number;
}

export function signInLinkMail({ name, href, validFor_min }: SignInLinkMail): MailContent {
	return layOutMail({
		subject: 'Your sign-in link',
		from: 'Sinewright',
		heading: 'Sign in to Sinewright',
		greeting: `Hello ${name},`,
		paragraphs: ['You asked for a link to sign in without a password. It opens a page with one button.'],
		button: { label: 'Open the sign-in page', href },
		closing: [
			`The link works once and for ${validFor_min} minutes.`,
			'If you did not ask for it, leave it: nobody is signed in until the button on that page is pressed.'
		]
	});
}

export interface PasswordResetMail {
	name: string;
	href: string;
	validFor_min: number;
}

export function passwordResetMail({ name, href, validFor_min }: PasswordResetMail): MailContent {
	return layOutMail({
		subject: 'Choose a new password',
		from: 'Sinewright',
		heading: 'Choose a new password',
		greeting: `Hello ${name},`,
		paragraphs: ['Somebody, most likely you, asked to set a new password for this address.'],
		button: { label: 'Choose a new password', href },
		closing: [
			`The link works once and for ${validFor_min} minutes. A new password signs you out on every device.`,
			'If it was not you, leave this mail: your password stays as it is.'
		]
	});
}

export interface PasswordChangedMail {
	name: string;
	when: string;
	resetHref: string;
}

export function passwordChangedMail({ name, when, resetHref }: PasswordChangedMail): MailContent {
	return layOutMail({
		subject: 'Your password was changed',
		from: 'Sinewright',
		heading: 'Your password was changed',
		greeting: `Hello ${name},`,
		paragraphs: [
			`The password of your account was changed at ${when}. If that was you, there is nothing to do.`
		],
		button: { label: 'It was not me: set a new password', href: resetHref }
	});
}

export interface InvitationMail {
	name: string;
	invitedBy: string;
	practiceName: string;
	role: Role;
	/** The client organisation, for its people. */
	clientName: string | null;
	href: string;
	validFor_days: number;
}

const PURPOSE: Record<Role, string> = {
	owner: 'to run the practice with them',
	engineer: 'to work on its surveys as an engineer',
	checker: 'to check and issue its reports',
	client: 'to read and acknowledge your power quality reports'
};

export function invitationMail(mail: InvitationMail): MailContent {
	const { name, invitedBy, practiceName, role, clientName, href, validFor_days } = mail;
	const forWhom = clientName === null ? '' : ` for ${clientName}`;
	return layOutMail({
		subject: `${practiceName} invites you`,
		from: practiceName,
		heading: `You are invited by ${practiceName}`,
		greeting: `Hello ${name},`,
		paragraphs: [`${invitedBy} of ${practiceName} invites you${forWhom} ${PURPOSE[role]}.`],
		button: { label: 'Accept the invitation', href },
		closing: [
			`The link is for you alone, works once and for ${validFor_days} days.`,
			'If you do not know the sender, leave this mail and nothing happens.'
		]
	});
}
