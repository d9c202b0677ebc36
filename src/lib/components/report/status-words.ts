import type { RevisionStatus } from '$lib/report/revision-status';

export const STATUS_WORDS: Record<RevisionStatus, string> = {
	draft: 'draft',
	'in-check': 'in check',
	returned: 'returned',
	issued: 'issued',
	superseded: 'superseded',
	withdrawn: 'withdrawn'
};
