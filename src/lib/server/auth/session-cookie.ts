import type { Config } from '../config';

/** Name of the session cookie; over https the prefix makes browsers refuse it from anywhere but a secure origin. */
export function sessionCookieName(config: Pick<Config, 'origin'>): string {
	return isSecure(config) ? '__Secure-sinewright.session' : 'sinewright.session';
}

export function isSecure(config: Pick<Config, 'origin'>): boolean {
	return config.origin.startsWith('https://');
}
