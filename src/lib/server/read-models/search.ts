import type { Db } from '../db/database';
import type { Scope } from '../repositories/scope';
import { likePattern } from './list-query';

export interface SearchHit {
	href: string;
	title: string;
	detail: string;
}

export interface SearchGroup {
	kind: 'clients' | 'sites' | 'points' | 'surveys' | 'captures' | 'instruments' | 'sensors' | 'reports';
	label: string;
	hits: SearchHit[];
	/** More were found than are shown. */
	more: boolean;
}

/** Hits shown of each kind. */
const SHOWN = 12;

interface Source {
	kind: SearchGroup['kind'];
	label: string;
	table: string;
	/** Columns searched. */
	columns: string[];
	join: string;
	select: { title: string; detail: string; href: string };
	where?: string;
	/** The practice's own, of no client: nobody who acts for a client finds them. */
	ofPractice?: true;
}

/** `x` is the row found. Each join carries the practice along, and each is filtered by it below. */
const SOURCES: Source[] = [
	{
		kind: 'clients',
		label: 'Clients',
		table: 'clients',
		columns: ['x.name', 'x.contact_name', 'x.contact_email'],
		join: '',
		select: { title: 'x.name', detail: 'x.contact_name', href: "'/clients/' || x.id" }
	},
	{
		kind: 'sites',
		label: 'Sites',
		table: 'sites',
		columns: ['x.name', 'x.address'],
		join: 'join clients c on c.id = x.client_id',
		select: { title: 'x.name', detail: 'c.name', href: "'/clients/' || x.client_id || '/sites/' || x.id" }
	},
	{
		kind: 'points',
		label: 'Points',
		table: 'points',
		columns: ['x.name'],
		join: 'join sites s on s.id = x.site_id join clients c on c.id = x.client_id',
		select: {
			title: 'x.name',
			detail: "c.name || ' · ' || s.name",
			href: "'/clients/' || x.client_id || '/sites/' || x.site_id || '/points/' || x.id"
		}
	},
	{
		kind: 'surveys',
		label: 'Surveys',
		table: 'surveys',
		columns: ['x.number', 'x.title'],
		join: 'join sites s on s.id = x.site_id join clients c on c.id = x.client_id',
		select: {
			title: "x.number || ' · ' || x.title",
			detail: "c.name || ' · ' || s.name",
			href: "'/surveys/' || x.id"
		}
	},
	{
		kind: 'captures',
		label: 'Captures',
		table: 'captures',
		columns: ['x.name'],
		join: 'join surveys v on v.id = x.survey_id',
		select: {
			title: 'x.name',
			detail: "v.number || ' · ' || v.title",
			href: "'/surveys/' || x.survey_id || '/captures'"
		},
		where: 'x.removed_at is null'
	},
	{
		kind: 'instruments',
		label: 'Instruments',
		table: 'instruments',
		columns: ['x.name', 'x.model', 'x.serial_number'],
		join: '',
		select: {
			title: 'x.name',
			detail: "trim(x.model || ' · ' || x.serial_number, ' ·')",
			href: "'/instruments/' || x.id"
		},
		ofPractice: true
	},
	{
		kind: 'sensors',
		label: 'Sensors',
		table: 'sensors',
		columns: ['x.name', 'x.serial_number', "replace(x.kind, '-', ' ')"],
		join: '',
		select: {
			title: 'x.name',
			detail: "trim(replace(x.kind, '-', ' ') || ' · ' || x.serial_number, ' ·')",
			href: "'/instruments/sensors/' || x.id"
		},
		ofPractice: true
	},
	{
		kind: 'reports',
		label: 'Reports',
		table: 'reports',
		columns: ['x.number', 'x.title'],
		join: 'join clients c on c.id = x.client_id',
		select: {
			title: "coalesce(x.number || ' · ', '') || x.title",
			detail: "c.name || case when x.number is null then ' · draft' else '' end",
			href: "'/surveys/' || x.survey_id || '/report'"
		}
	}
];

async function find(db: Db, scope: Scope, source: Source, q: string): Promise<SearchGroup> {
	if (source.ofPractice && scope.clientId !== undefined)
		return { kind: source.kind, label: source.label, hits: [], more: false };
	const words = likePattern(q);
	const clientColumn = source.table === 'clients' ? 'x.id' : 'x.client_id';
	const conditions = [
		'x.practice_id = ?',
		`(${source.columns.map((column) => `${column} like ? escape '\\'`).join(' or ')})`,
		...(source.where === undefined ? [] : [source.where]),
		...(scope.clientId === undefined ? [] : [`${clientColumn} = ?`])
	];
	const bindings = [
		scope.practiceId,
		...source.columns.map(() => words),
		...(scope.clientId === undefined ? [] : [scope.clientId])
	];
	const hits: SearchHit[] = await db.raw(
		`select ${source.select.href} as href, ${source.select.title} as title, ${source.select.detail} as detail
		from ${source.table} x ${source.join} where ${conditions.join(' and ')}
		order by title collate nocase limit ${SHOWN + 1}`,
		bindings
	);
	return {
		kind: source.kind,
		label: source.label,
		hits: hits.slice(0, SHOWN),
		more: hits.length > SHOWN
	};
}

/** Groups in which the words occur; empty when nothing was asked for. */
export async function searchPractice(db: Db, scope: Scope, q: string): Promise<SearchGroup[]> {
	const words = q.trim().slice(0, 100);
	if (words === '') return [];
	const groups: SearchGroup[] = [];
	for (const source of SOURCES) groups.push(await find(db, scope, source, words));
	return groups.filter((group) => group.hits.length > 0);
}
