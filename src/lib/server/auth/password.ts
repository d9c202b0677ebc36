import { hash, verify } from '@node-rs/argon2';

// argon2id, 19 MiB, two passes, one lane: the OWASP password storage cheat sheet's first recommendation.
const COST = { memoryCost: 19456, timeCost: 2, parallelism: 1 };
const PARAMETERS = `m=${COST.memoryCost},t=${COST.timeCost},p=${COST.parallelism}`;

export function hashPassword(password: string): Promise<string> {
	return hash(password, COST);
}

let decoy: Promise<string> | null = null;

/**
 * True when the password belongs to the hash. Without a hash (nobody has this address, or the person signs in by
 * link only) a decoy is verified all the same, so that the time taken tells nothing.
 */
export async function verifyPassword(storedHash: string | null, password: string): Promise<boolean> {
	decoy ??= hashPassword('nobody signs in with this');
	const matches = await verify(storedHash ?? (await decoy), password).catch(() => false);
	return storedHash !== null && matches;
}

/** True for a hash made with other costs than today's; it is made anew at the next successful sign-in. */
export function needsRehash(storedHash: string): boolean {
	return !storedHash.startsWith(`$argon2id$v=19$${PARAMETERS}$`);
}
