/**
 * Who may enter where, written by hand and apart from the product's own guards: route-matrix.test.ts compares the
 * two. A route, form action or method that is missing here fails that test.
 *
 * To add a route: its id, who it is for, and its form actions or methods. `status` is what a permitted reader
 * gets, 200 unless stated. `[name]` parameters are filled from the worlds of matrix-world.ts.
 */
import type { Role } from '$lib/access/access';

export type Audience = readonly Role[];
export const CONSULTANTS: Audience = ['owner', 'engineer', 'checker'];
export const CHECKERS: Audience = ['owner', 'checker'];
export const OWNER: Audience = ['owner'];
export const CLIENT: Audience = ['client'];
export const SIGNED_IN: Audience = ['owner', 'engineer', 'checker', 'client'];

export interface RouteRule {
	/** Who may read the page; also who may use its actions, unless an action says otherwise. */
	for: Audience | 'anybody';
	status?: number;
	query?: string;
	actions?: readonly string[] | Readonly<Record<string, Audience>>;
	/** Of a +server.ts: method → what a permitted caller gets with an empty body. */
	methods?: Readonly<
		Partial<Record<'GET' | 'HEAD' | 'POST' | 'PUT' | 'PATCH' | 'DELETE', readonly number[]>>
	>;
}

const consultants = (actions: readonly string[] = []): RouteRule => ({ for: CONSULTANTS, actions });
const owner = (actions: readonly string[] = []): RouteRule => ({ for: OWNER, actions });
const client = (actions: readonly string[] = []): RouteRule => ({ for: CLIENT, actions });
const anybody = (actions: readonly string[] = []): RouteRule => ({ for: 'anybody', actions });

export const ROUTE_TABLE: Readonly<Record<string, RouteRule>> = {
	'/': { for: 'anybody', status: 303 },
	'/healthz': { for: 'anybody', methods: { GET: [200] } },
	'/mailbox': anybody(),
	'/mailbox/[mail]': anybody(),
	'/theme': { for: 'anybody', methods: { POST: [303] } },

	'/(auth)/forgotten': anybody(['default']),
	'/(auth)/invitation/[token]': anybody(['default']),
	'/(auth)/reset/[token]': anybody(['default']),
	'/(auth)/sign-in': anybody(['default']),
	'/(auth)/sign-in/confirm': anybody(['default']),
	'/(auth)/sign-in/link': anybody(['default']),
	'/(auth)/sign-out': { for: 'anybody', status: 303, actions: ['default'] },

	'/(account)/practices': { for: SIGNED_IN, actions: ['default'] },
	'/(account)/profile': {
		for: SIGNED_IN,
		actions: ['rename', 'password', 'signOutDevice', 'signOutEverywhere']
	},

	'/(app)/clients': consultants(),
	'/(app)/clients/[client]': consultants(['archive', 'restore']),
	'/(app)/clients/[client]/edit': consultants(['default']),
	'/(app)/clients/[client]/sites/[site]': consultants(['archive', 'restore']),
	'/(app)/clients/[client]/sites/[site]/edit': consultants(['default']),
	'/(app)/clients/[client]/sites/[site]/points/[point]': consultants(['archive', 'restore']),
	'/(app)/clients/[client]/sites/[site]/points/[point]/edit': consultants(['default']),
	'/(app)/clients/[client]/sites/[site]/points/new': consultants(['default']),
	'/(app)/clients/[client]/sites/new': consultants(['default']),
	'/(app)/clients/new': consultants(['default']),
	'/(app)/desk': consultants(),
	'/(app)/instruments': consultants(),
	'/(app)/instruments/[instrument]': consultants(['calibrate', 'archive', 'restore']),
	'/(app)/instruments/[instrument]/edit': consultants(['default']),
	'/(app)/instruments/new': consultants(['default']),
	'/(app)/instruments/sensors': consultants(),
	'/(app)/instruments/sensors/[sensor]': consultants(['calibrate', 'archive', 'restore']),
	'/(app)/instruments/sensors/[sensor]/edit': consultants(['default']),
	'/(app)/instruments/sensors/new': consultants(['default']),
	'/(app)/instruments/table-layouts': consultants(['rename', 'archive', 'restore']),
	'/(app)/limit-library': consultants(),
	'/(app)/limit-library/[limitSet]': consultants(),
	'/(app)/practice': { for: OWNER, status: 303 },
	'/(app)/practice/history': owner(),
	'/(app)/practice/letterhead': owner(['default']),
	'/(app)/practice/outbox': owner(['retry']),
	'/(app)/practice/storage': owner(['default']),
	'/(app)/practice/people': owner(['invite', 'resend', 'withdraw', 'role', 'remove']),
	'/(app)/queries': consultants(),
	'/(app)/queries/[query]': consultants(['answer', 'close']),
	'/(app)/search': consultants(),
	'/(app)/surveys': consultants(),
	'/(app)/surveys/[survey]': { for: CONSULTANTS, status: 303 },
	'/(app)/surveys/[survey]/captures': consultants(),
	'/(app)/surveys/[survey]/captures/[capture]': consultants(['confirm', 'instrument', 'remove']),
	'/(app)/surveys/[survey]/captures/[capture]/checks': consultants(['overrule', 'takeBack']),
	// The matrix's capture is COMTRADE, whose columns nobody has to tell.
	'/(app)/surveys/[survey]/captures/[capture]/table': { for: CONSULTANTS, status: 303, actions: ['apply'] },
	'/(app)/surveys/[survey]/captures/[capture]/view': consultants(['prepare']),
	'/(app)/surveys/[survey]/point': consultants(['save', 'close', 'reopen']),
	'/(app)/surveys/[survey]/readings': consultants(),
	'/(app)/surveys/[survey]/remedies': consultants([
		'add',
		'suggest',
		'update',
		'remove',
		'move',
		'confirm',
		'reopen'
	]),
	'/(app)/surveys/[survey]/report': {
		for: CONSULTANTS,
		actions: {
			create: CONSULTANTS,
			save: CONSULTANTS,
			useCurrentVerdict: CONSULTANTS,
			sendForCheck: CONSULTANTS,
			returnToAuthor: CHECKERS,
			issue: CHECKERS,
			preview: CONSULTANTS,
			revise: CONSULTANTS,
			withdraw: CHECKERS
		}
	},
	'/(app)/surveys/[survey]/verdict': consultants(['assess', 'judgeBy', 'report']),
	'/(app)/surveys/new': consultants(['default']),

	'/(portal)/portal': { for: CLIENT, status: 307 },
	'/(portal)/portal/actions': client(['done']),
	'/(portal)/portal/reports': client(),
	'/(portal)/portal/reports/[revision]': client(['acknowledge', 'ask', 'done']),
	'/(portal)/portal/sites': client(),
	'/(portal)/portal/sites/[site]': client(),

	'/(api)/api/v1/captures/[capture]/files/[file]': { for: CONSULTANTS, methods: { GET: [200] } },
	'/(api)/api/v1/captures/[capture]/table-preview': { for: CONSULTANTS, methods: { POST: [422] } },
	'/(api)/api/v1/captures/[capture]/tiles/[level]/[tile]': { for: CONSULTANTS, methods: { GET: [200] } },
	'/(api)/api/v1/captures/[capture]/view': { for: CONSULTANTS, methods: { GET: [200] } },
	'/(api)/api/v1/captures/[capture]/waveform': {
		for: CONSULTANTS,
		query: 'from_s=0&to_s=0.1&points=100',
		methods: { GET: [200] }
	},
	'/(api)/api/v1/captures/[capture]/window': {
		for: CONSULTANTS,
		query: 'at_s=0.1',
		methods: { GET: [200] }
	},
	'/(api)/api/v1/certificates/[certificate]': { for: CONSULTANTS, methods: { GET: [200] } },
	'/(api)/api/v1/jobs/[job]': { for: CONSULTANTS, methods: { GET: [200] } },
	'/(api)/api/v1/jobs/[job]/cancel': { for: CONSULTANTS, methods: { POST: [200, 409] } },
	'/(api)/api/v1/jobs/[job]/events': { for: CONSULTANTS, methods: { GET: [200] } },
	'/(api)/api/v1/reports/[revision]/pdf': { for: SIGNED_IN, methods: { GET: [200] } },
	'/(api)/api/v1/surveys/[survey]/captures': { for: CONSULTANTS, methods: { POST: [422] } },
	'/(api)/api/v1/surveys/[survey]/upload-sessions': {
		for: CONSULTANTS,
		// Without the protocol's own header: precondition failed.
		methods: { GET: [200], POST: [412] }
	},
	'/(api)/api/v1/surveys/[survey]/upload-sessions/[session]': {
		for: CONSULTANTS,
		// Sessions belong to the person who began them.
		methods: { HEAD: [404, 412], PATCH: [404, 412], DELETE: [204, 404] }
	},
	'/(api)/api/v1/surveys/[survey]/upload-sessions/[session]/arrival': {
		for: CONSULTANTS,
		methods: { POST: [404, 409] }
	},
	'/(api)/api/v1/surveys/[survey]/uploads/known': { for: CONSULTANTS, methods: { POST: [422], PUT: [422] } },
	'/(api)/api/v1/surveys/[survey]/uploads': { for: CONSULTANTS, methods: { PUT: [200, 201, 422] } },
	'/(api)/api/v1/surveys/[survey]/uploads/[upload]': { for: CONSULTANTS, methods: { DELETE: [204] } }
};
