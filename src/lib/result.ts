/** A value, or a described problem. Bad input is a value here; exceptions are for our own mistakes. */
export type Result<T, P> = { ok: true; value: T } | { ok: false; problem: P };

export function ok<T>(value: T): { ok: true; value: T } {
	return { ok: true, value };
}

export function err<P>(problem: P): { ok: false; problem: P } {
	return { ok: false, problem };
}
