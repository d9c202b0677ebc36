import { renderDraft } from '../services/reports/issue-revision';
import type { JobHandler } from './handlers';
import { renderReport } from './render-report.job';

export const handle: JobHandler = async (container, rawPayload, context) => {
	const { revisionId } = renderReport.payload.parse(rawPayload);
	await renderDraft(container, { practiceId: context.practiceId }, revisionId, context.progress, (trx) =>
		context.finish(trx)
	);
};
