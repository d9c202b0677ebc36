import pino, { type Logger } from 'pino';

export type Log = Logger;

export function createLog(level: string, process: 'web' | 'worker' | 'script'): Log {
	return pino({
		level,
		base: { process },
		timestamp: pino.stdTimeFunctions.isoTime,
		// Secrets never reach a log, whatever object is handed in.
		redact: { paths: ['*.password', '*.token', 'password', 'token', 'cookie', '*.cookie'], remove: true }
	});
}
