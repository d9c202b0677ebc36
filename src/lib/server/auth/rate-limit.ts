import { RateLimiterMemory, RateLimiterRes } from 'rate-limiter-flexible';
import type { RequestEvent } from '@sveltejs/kit';
import { normaliseEmail } from './email-address';

const MINUTE_S = 60;

const limiter = (keyPrefix: string, points: number, duration: number) =>
	new RateLimiterMemory({ keyPrefix, points, duration });

/**
 * Counted in the web process's memory: there is one such process. By address a whole office behind one router may
 * be meant, so those limits are wider, and a success gives its point back.
 */
const LIMITS = {
	signIn: {
		address: limiter('sign-in/ip', 60, 10 * MINUTE_S),
		email: limiter('sign-in/mail', 10, 15 * MINUTE_S)
	},
	mail: { address: limiter('mail/ip', 40, 60 * MINUTE_S), email: limiter('mail/mail', 5, 60 * MINUTE_S) },
	token: { address: limiter('token/ip', 40, 10 * MINUTE_S), email: null }
};
export type LimitedForm = keyof typeof LIMITS;

export interface Allowance {
	/** Seconds to wait; null when the form may be sent now. */
	wait_s: number | null;
	/** A form that succeeded was no guess: it costs nothing. */
	giveBack(): Promise<void>;
}

async function take(from: RateLimiterMemory, key: string): Promise<number | null> {
	try {
		await from.consume(key);
		return null;
	} catch (cause) {
		if (cause instanceof RateLimiterRes) return Math.max(1, Math.ceil(cause.msBeforeNext / 1000));
		throw cause;
	}
}

export async function takeAllowance(
	form: LimitedForm,
	address: string,
	email: string | null
): Promise<Allowance> {
	const limits = LIMITS[form];
	const mailKey = email === null ? null : normaliseEmail(email);
	const waits = [
		await take(limits.address, address),
		mailKey !== null && limits.email ? await take(limits.email, mailKey) : null
	].filter((wait) => wait !== null);
	return {
		wait_s: waits.length > 0 ? Math.max(...waits) : null,
		async giveBack() {
			await limits.address.reward(address, 1);
			if (mailKey !== null) await limits.email?.delete(mailKey);
		}
	};
}

/** The sentence for the one who has to wait; sets Retry-After beside it. */
export function tooManyAttempts(event: Pick<RequestEvent, 'setHeaders'>, wait_s: number): string {
	event.setHeaders({ 'retry-after': String(wait_s) });
	const minutes = Math.ceil(wait_s / MINUTE_S);
	return `Too many attempts. Wait ${minutes} ${minutes === 1 ? 'minute' : 'minutes'}, then try again.`;
}
