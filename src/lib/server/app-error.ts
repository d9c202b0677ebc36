export type AppErrorCode = 'not-found' | 'forbidden' | 'conflict' | 'invalid' | 'unavailable';

const STATUS: Record<AppErrorCode, number> = {
	'not-found': 404,
	forbidden: 403,
	conflict: 409,
	invalid: 422,
	unavailable: 503
};

/**
 * An expected failure of a use case, with a sentence for the person who caused it.
 * Another practice's or client's row is always `not-found`: its existence is nobody's business.
 */
export class AppError extends Error {
	readonly code: AppErrorCode;
	readonly status: number;

	constructor(code: AppErrorCode, sentence: string, options?: ErrorOptions) {
		super(sentence, options);
		this.name = 'AppError';
		this.code = code;
		this.status = STATUS[code];
	}
}

/** The row, or a `not-found` with a sentence naming what was looked for. */
export function requireFound<T>(row: T | null | undefined, what: string): T {
	if (row === null || row === undefined)
		throw new AppError('not-found', `This ${what} does not exist, or you have no access to it.`);
	return row;
}
