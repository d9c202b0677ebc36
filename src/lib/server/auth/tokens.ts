import { createHash, randomBytes } from 'node:crypto';

/** A secret that nobody can guess: 256 random bits, safe in a cookie and in an address. */
export function newToken(): string {
	return randomBytes(32).toString('base64url');
}

/**
 * What is stored in place of a token. A plain hash is enough: the token is random, so there is nothing to guess
 * and nothing to salt.
 */
export function hashToken(token: string): string {
	return createHash('sha256').update(token).digest('hex');
}
