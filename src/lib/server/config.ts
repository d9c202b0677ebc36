import { z } from 'zod';

/** Settings come from the environment, once, at start; a wrong one stops the start with a sentence. */
const environment = z
	.object({
		SINEWRIGHT_MODE: z.enum(['production', 'demo', 'development', 'test']).default('production'),
		DATA_DIR: z.string().min(1).default('data'),
		HOST: z.string().min(1).default('127.0.0.1'),
		PORT: z.coerce.number().int().min(1).max(65535).default(3000),
		ORIGIN: z.url().optional(),
		AUTH_SECRET: z.string().min(32, 'must have at least 32 characters').optional(),
		SMTP_URL: z
			.string()
			.regex(/^smtps?:\/\//, 'must start with smtp:// or smtps://')
			.optional(),
		MAIL_FROM: z.string().min(3).default('Sinewright <no-reply@localhost>'),
		LOG_LEVEL: z.enum(['fatal', 'error', 'warn', 'info', 'debug', 'trace', 'silent']).default('info'),
		UPLOAD_LIMIT_MB: z.coerce.number().positive().default(2048),
		SESSION_DAYS: z.coerce.number().positive().max(90).default(14),
		WORKER_POLL_MS: z.coerce.number().int().min(20).default(250)
	})
	.superRefine((env, context) => {
		if (env.SINEWRIGHT_MODE !== 'production') return;
		// Mailed links are built from ORIGIN, never from a request header, which anybody can forge.
		if (!env.ORIGIN)
			context.addIssue({
				code: 'custom',
				path: ['ORIGIN'],
				message: 'must be set in production, e.g. https://sinewright.example.com'
			});
		if (!env.AUTH_SECRET)
			context.addIssue({
				code: 'custom',
				path: ['AUTH_SECRET'],
				message: 'must be set in production: at least 32 random characters'
			});
	});

export interface Config {
	mode: 'production' | 'demo' | 'development' | 'test';
	dataDir: string;
	host: string;
	port: number;
	/** Public address, without a trailing slash; the base of every mailed link. */
	origin: string;
	authSecret: string;
	smtpUrl: string | null;
	mailFrom: string;
	logLevel: string;
	uploadLimit_bytes: number;
	session_days: number;
	workerPoll_ms: number;
	/** The local mailbox can be read in the browser: demo and development only. */
	mailboxVisible: boolean;
}

/** Throws an Error whose message lists every wrong setting, one sentence a line. */
export function parseConfig(env: Record<string, string | undefined>): Config {
	const given = Object.fromEntries(Object.entries(env).filter(([, value]) => value !== ''));
	const parsed = environment.safeParse(given);
	if (!parsed.success) {
		const lines = parsed.error.issues.map((issue) => `${issue.path.join('.')} ${issue.message}.`);
		throw new Error(`Sinewright cannot start with these settings:\n${lines.join('\n')}`);
	}
	const value = parsed.data;
	return {
		mode: value.SINEWRIGHT_MODE,
		dataDir: value.DATA_DIR,
		host: value.HOST,
		port: value.PORT,
		origin: (value.ORIGIN ?? `http://localhost:${value.PORT}`).replace(/\/+$/, ''),
		authSecret: value.AUTH_SECRET ?? 'only-for-the-demo-and-for-development',
		smtpUrl: value.SMTP_URL ?? null,
		mailFrom: value.MAIL_FROM,
		logLevel: value.LOG_LEVEL,
		uploadLimit_bytes: value.UPLOAD_LIMIT_MB * 1024 * 1024,
		session_days: value.SESSION_DAYS,
		workerPoll_ms: value.WORKER_POLL_MS,
		mailboxVisible: value.SMTP_URL === undefined && value.SINEWRIGHT_MODE !== 'production'
	};
}
