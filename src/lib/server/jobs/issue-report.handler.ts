import { issueRevision } from '../services/reports/issue-revision';
import type { JobHandler } from './handlers';
import { issueReport } from './issue-report.job';

export const handle: JobHandler = async (container, rawPayload, context) => {
	const order = issueReport.payload.parse(rawPayload);
	await issueRevision(container, { practiceId: context.practiceId }, order, context.progress, (trx) =>
		context.finish(trx)
	);
};
