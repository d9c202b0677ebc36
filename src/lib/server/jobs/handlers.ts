import type { Container } from '../container';
import type { JobContext } from './job-definition';

export type JobHandler = (container: Container, payload: unknown, context: JobContext) => Promise<void>;

/** Kind → handler, loaded when first needed: the web process never pays for what only the worker runs. */
export const JOB_HANDLERS: Record<string, () => Promise<JobHandler>> = {
	'unpack-archive': async () => (await import('./unpack-archive.handler')).handle,
	'recognise-capture': async () => (await import('./recognise-capture.handler')).handle,
	'read-table': async () => (await import('./read-table.handler')).handle,
	'make-pyramid': async () => (await import('./make-pyramid.handler')).handle,
	'analyse-capture': async () => (await import('./analyse-capture.handler')).handle,
	'assess-survey': async () => (await import('./assess-survey.handler')).handle,
	'render-report': async () => (await import('./render-report.handler')).handle,
	'issue-report': async () => (await import('./issue-report.handler')).handle
};
