import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { ROLES, type Role } from '$lib/access/access';
import { routeFiles } from '../architecture/route-files';
import { buildMissing, startBuiltApp, type AppRequest, type BuiltApp } from './built-app';
import { buildMatrixWorld, type Ids, type MatrixWorld } from './matrix-world';
import { ROUTE_TABLE, type Audience, type RouteRule } from './route-table';

let app: BuiltApp;
let world: MatrixWorld;
const cookies = {} as Record<Role, string>;

/** One thing that can be asked of a route. */
interface Call {
	routeId: string;
	rule: RouteRule;
	title: string;
	method: string;
	/** Query string of a form action, e.g. "?/save". */
	action: string | null;
	audience: Audience | 'anybody';
}

const files = routeFiles().filter(({ file }) => !file.endsWith('+layout.server.ts'));

function audienceOf(rule: RouteRule, action: string): Audience | 'anybody' {
	if (rule.actions && !Array.isArray(rule.actions)) {
		const each = (rule.actions as Readonly<Record<string, Audience>>)[action];
		if (each) return each;
	}
	return rule.for;
}

const calls: Call[] = files.flatMap(({ routeId, file, entrances }) => {
	const rule = ROUTE_TABLE[routeId];
	if (!rule) return [];
	const base = { routeId, rule };
	const page: Call[] = file.endsWith('+page.server.ts')
		? [{ ...base, title: `GET ${routeId}`, method: 'GET', action: null, audience: rule.for }]
		: [];
	const asked = entrances.map((entrance): Call | null => {
		if (entrance.kind === 'action')
			return {
				...base,
				title: `POST ${routeId} ?/${entrance.name}`,
				method: 'POST',
				action: entrance.name === 'default' ? '' : `?/${entrance.name}`,
				audience: audienceOf(rule, entrance.name)
			};
		if (entrance.kind === 'method')
			return {
				...base,
				title: `${entrance.name} ${routeId}`,
				method: entrance.name,
				action: null,
				audience: rule.for
			};
		return null;
	});
	return [...page, ...asked.filter((call) => call !== null)];
});

const parametersOf = (routeId: string) => [...routeId.matchAll(/\[(\w+)\]/g)].map((match) => match[1] ?? '');

/** Numbers that name a place within what an id stands for belong to nobody. */
const PLACES = ['level', 'tile'];
const idsOf = (routeId: string) => parametersOf(routeId).filter((name) => !PLACES.includes(name));

function pathOf({ routeId, rule, action }: Call, ids: Ids): string {
	const path = routeId.replace(/\/\(\w+\)/g, '').replace(/\[(\w+)\]/g, (_all, name: string) => {
		const id = ids[name];
		if (!id) throw new Error(`matrix-world.ts has no id for [${name}] of ${routeId}`);
		return encodeURIComponent(id);
	});
	return (path === '' ? '/' : path) + (action ?? (rule.query ? `?${rule.query}` : ''));
}

async function ask(
	call: Call,
	ids: Ids,
	as?: string
): Promise<{ status: number; location: string; body: string }> {
	const options: AppRequest = { method: call.method, ...(as === undefined ? {} : { as }) };
	if (call.action !== null) options.body = new URLSearchParams();
	const response = await app.request(pathOf(call, ids), options);
	const streams = response.headers.get('content-type')?.includes('event-stream');
	if (streams) await response.body?.cancel();
	return {
		status: response.status,
		location: response.headers.get('location') ?? '',
		body: streams ? '' : await response.text()
	};
}

const isApi = (call: Call) => call.routeId.startsWith('/(api)');
const isClients = (role: Role) => role === 'client';
/** The half of the product that is not the role's own. */
const inOtherHalf = (call: Call, role: Role) =>
	isClients(role) ? call.routeId.startsWith('/(app)') : call.routeId.startsWith('/(portal)');
const permitted = (call: Call): Role[] =>
	call.audience === 'anybody' ? [...ROLES] : ROLES.filter((role) => call.audience.includes(role));
const shut = calls.filter(({ audience }) => audience !== 'anybody');
/** Closing one's own session here would end the walk. */
const ENDS_THE_SESSION = /signOutEverywhere|\/sign-out/;

function expectAnswered(call: Call, status: number, location: string): void {
	if (call.rule.methods) {
		const expected = call.rule.methods[call.method as keyof typeof call.rule.methods] ?? [];
		expect(expected, `${call.title} is ${status}`).toContain(status);
	} else if (call.method === 'GET') expect(status, call.title).toBe(call.rule.status ?? 200);
	else {
		// An empty form: done, or refused as a form; neither a crash nor a closed door.
		expect(status, call.title).toBeLessThan(500);
		expect([401, 403], call.title).not.toContain(status);
		expect(location, call.title).not.toContain('/sign-in?next');
	}
}

it('every route, form action and method stands in the table, and the table names no other', () => {
	const found = files.map(({ routeId, entrances }) => ({
		routeId,
		actions: entrances.filter(({ kind }) => kind === 'action').map(({ name }) => name),
		methods: entrances.filter(({ kind }) => kind === 'method').map(({ name }) => name)
	}));
	const missing = found.filter(({ routeId }) => !(routeId in ROUTE_TABLE)).map(({ routeId }) => routeId);
	expect(missing, 'routes to add to tests/http/route-table.ts').toEqual([]);
	const known = new Set(found.map(({ routeId }) => routeId));
	expect(Object.keys(ROUTE_TABLE).filter((routeId) => !known.has(routeId))).toEqual([]);
	for (const { routeId, actions, methods } of found) {
		const rule = ROUTE_TABLE[routeId];
		const named = Array.isArray(rule?.actions) ? rule.actions : Object.keys(rule?.actions ?? {});
		expect([...named].sort(), `actions of ${routeId}`).toEqual(actions.sort());
		expect(Object.keys(rule?.methods ?? {}).sort(), `methods of ${routeId}`).toEqual(methods.sort());
	}
});

describe.skipIf(buildMissing)('every route (skipped where build/ is missing: run npm run build)', () => {
	beforeAll(async () => {
		app = await startBuiltApp(async (db, config) => {
			world = await buildMatrixWorld(db, config);
		});
		for (const role of ROLES) cookies[role] = await app.signInAs(world.people[role]);
	}, 180_000);
	afterAll(() => app?.stop());

	it.each(shut)('$title: nobody gets in without signing in', async (call) => {
		const { status, location, body } = await ask(call, world.own);
		if (isApi(call)) {
			expect(status).toBe(401);
			expect(body).not.toContain('Millbrook');
		} else {
			expect(status).toBe(303);
			expect(location).toMatch(/^\/sign-in\?next=%2F/);
		}
	});

	it.each(shut)('$title: closed to every role that it is not for', async (call) => {
		for (const role of ROLES.filter((each) => !permitted(call).includes(each))) {
			const { status, location } = await ask(call, world.own, cookies[role]);
			if (inOtherHalf(call, role) && call.method === 'GET')
				expect([status, location], role).toEqual([303, isClients(role) ? '/portal/reports' : '/desk']);
			else expect(status, role).toBe(403);
		}
	});

	it.each(calls.filter(({ method }) => method === 'GET'))('$title: open to whom it is for', async (call) => {
		for (const role of permitted(call)) {
			const { status, location } = await ask(call, world.own, cookies[role]);
			// Who is signed in already has no use for the sign-in page.
			if (call.routeId === '/(auth)/sign-in') expect(status).toBe(303);
			else if (call.routeId === '/(auth)/sign-out') expect(status).toBe(200);
			else expectAnswered(call, status, location);
		}
	});

	const withIds = shut.filter(({ routeId }) => idsOf(routeId).length > 0);

	it.each(withIds)("$title: another practice's ids are as if they did not exist", async (call) => {
		const before = await rowsOf(world.foreignPracticeId);
		for (const role of permitted(call))
			for (const name of idsOf(call.routeId)) await expectUnknown(call, role, name, world.foreign);
		expect(await rowsOf(world.foreignPracticeId)).toBe(before);
	});

	it.each(withIds.filter(({ audience }) => audience.includes('client')))(
		"$title: another client's ids are as if they did not exist",
		async (call) => {
			for (const name of idsOf(call.routeId)) await expectUnknown(call, 'client', name, world.neighbours);
		}
	);

	// Last, for they change things.
	const writes = calls.filter(({ method, title }) => method !== 'GET' && !ENDS_THE_SESSION.test(title));
	it.each(writes)('$title: open to whom it is for', async (call) => {
		const role = permitted(call)[0] ?? 'owner';
		const { status, location } = await ask(call, world.own, cookies[role]);
		expectAnswered(call, status, location);
	});

	/** One parameter of somebody else's among our own: answered exactly as an id that nobody has. */
	async function expectUnknown(call: Call, role: Role, name: string, theirs: Ids): Promise<void> {
		const madeUp = /^\d+$/.test(theirs[name] ?? '') ? '987654321' : randomUUID();
		const foreign = await ask(call, { ...world.own, [name]: theirs[name] ?? '' }, cookies[role]);
		const unknown = await ask(call, { ...world.own, [name]: madeUp }, cookies[role]);
		const where = `${role}, [${name}] of another`;
		expect(foreign.status, where).toBe(unknown.status);
		if (call.method === 'GET') expect(foreign.status, where).toBe(404);
		else expect([400, 404, 422], where).toContain(foreign.status);
		expect(stripped(foreign.body, theirs[name] ?? ''), where).toBe(stripped(unknown.body, madeUp));
	}

	function stripped(body: string, id: string): string {
		const without = body
			.replace(/nonce="[^"]*"/g, '')
			.replace(/[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}/g, 'UUID');
		// A short number stands in a page for many other things too, so all numbers go.
		return /^\d+$/.test(id) ? without.replace(/\d+/g, 'N') : without;
	}

	/** Everything that a practice has, as one text, to see that a walk through it changed nothing. */
	async function rowsOf(practiceId: string): Promise<string> {
		const tables: { name: string }[] = await app
			.db('sqlite_master')
			.where({ type: 'table' })
			.whereRaw("sql like '%practice_id%'")
			.orderBy('name')
			.select('name');
		const contents = [];
		for (const { name } of tables)
			contents.push(
				await app.db.raw('select * from ?? where practice_id = ? order by rowid', [name, practiceId])
			);
		return JSON.stringify(contents);
	}
});
