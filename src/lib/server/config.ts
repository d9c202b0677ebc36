import { z } from 'zod';
import type { BucketSettings } from './storage/bucket-blob-store';

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
		STORAGE: z.enum(['folder', 'bucket']).default('folder'),
		BUCKET_NAME: z.string().min(3, 'must be the name of the bucket').optional(),
		BUCKET_REGION: z.string().min(1).default('us-east-1'),
		BUCKET_ENDPOINT: z.url('must be an address such as https://objects.example.com').optional(),
		BUCKET_ACCESS_KEY: z.string().min(1).optional(),
		BUCKET_SECRET_KEY: z.string().min(1).optional(),
		BUCKET_PATH_STYLE: z.enum(['yes', 'no']).default('yes'),
		BUCKET_PREFIX: z
			.string()
			.regex(/^([\w.-]+\/)*$/, 'must be folders that end with a slash, such as sinewright/')
			.default(''),
		BUCKET_CACHE_GB: z.coerce.number().positive().default(20),
		UPLOAD_LIMIT_MB: z.coerce.number().positive().default(2048),
		STORAGE_QUOTA_GB: z.coerce.number().positive().optional(),
		SESSION_DAYS: z.coerce.number().positive().max(90).default(14),
		WORKER_POLL_MS: z.coerce.number().int().min(20).default(250)
	})
	.superRefine((env, context) => {
		if (env.STORAGE === 'bucket' && !env.BUCKET_NAME)
			context.addIssue({
				code: 'custom',
				path: ['BUCKET_NAME'],
				message: 'must be set when STORAGE is bucket'
			});
		if ((env.BUCKET_ACCESS_KEY === undefined) !== (env.BUCKET_SECRET_KEY === undefined))
			context.addIssue({
				code: 'custom',
				path: ['BUCKET_SECRET_KEY'],
				message: 'and BUCKET_ACCESS_KEY must be set together, or neither'
			});
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
	/** Where originals and issued PDFs lie; null for a folder of the data directory. */
	bucket: BucketSettings | null;
	/** Room for local copies of what lies in the bucket. */
	bucketCache_bytes: number;
	uploadLimit_bytes: number;
	/** Originals that one practice may keep; null sets no bound. */
	storageQuota_bytes: number | null;
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
		bucket: bucketOf(value),
		bucketCache_bytes: value.BUCKET_CACHE_GB * 1e9,
		uploadLimit_bytes: value.UPLOAD_LIMIT_MB * 1024 * 1024,
		storageQuota_bytes: value.STORAGE_QUOTA_GB === undefined ? null : value.STORAGE_QUOTA_GB * 1024 ** 3,
		session_days: value.SESSION_DAYS,
		workerPoll_ms: value.WORKER_POLL_MS,
		mailboxVisible: value.SMTP_URL === undefined && value.SINEWRIGHT_MODE !== 'production'
	};
}

function bucketOf(env: z.infer<typeof environment>): BucketSettings | null {
	if (env.STORAGE === 'folder' || !env.BUCKET_NAME) return null;
	const { BUCKET_ACCESS_KEY: accessKeyId, BUCKET_SECRET_KEY: secretAccessKey } = env;
	return {
		name: env.BUCKET_NAME,
		region: env.BUCKET_REGION,
		endpoint: env.BUCKET_ENDPOINT ?? null,
		credentials: accessKeyId && secretAccessKey ? { accessKeyId, secretAccessKey } : null,
		pathStyle: env.BUCKET_PATH_STYLE === 'yes',
		prefix: env.BUCKET_PREFIX
	};
}
