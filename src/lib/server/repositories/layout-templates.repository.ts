import { parseToldLayout, type ToldLayout } from '../../recording/readers/delimited-text/table-layout-told';
import type { Db } from '../db/database';
import { newId } from '../db/ids';
import type { LayoutTemplateRow } from '../db/rows';
import type { Scope } from './scope';

/** A layout that the practice keeps, with the headings it was told for. */
export interface LayoutTemplate {
	id: string;
	name: string;
	headings: string[];
	layout: ToldLayout;
	createdAt: string;
	lastUsedAt: string | null;
	usedCount: number;
	archivedAt: string | null;
}

function toTemplate(row: LayoutTemplateRow): LayoutTemplate {
	return {
		id: row.id,
		name: row.name,
		headings: JSON.parse(row.headings_json) as string[],
		layout: parseToldLayout(row.layout_json),
		createdAt: row.created_at,
		lastUsedAt: row.last_used_at,
		usedCount: row.used_count,
		archivedAt: row.archived_at
	};
}

/** Templates of table layouts. They belong to the practice; no client and no other practice sees them. */
export function layoutTemplatesRepository(db: Db, scope: Pick<Scope, 'practiceId'>) {
	const mine = () => db('layout_templates').where({ practice_id: scope.practiceId });

	return {
		async byId(id: string): Promise<LayoutTemplate | null> {
			const row = await mine().where({ id }).first();
			return row ? toTemplate(row) : null;
		},
		async inUse(): Promise<LayoutTemplate[]> {
			const rows = await mine().whereNull('archived_at').orderBy('name');
			return rows.map(toTemplate);
		},
		async all(): Promise<LayoutTemplate[]> {
			const rows = await mine().orderByRaw('archived_at is not null, name');
			return rows.map(toTemplate);
		},
		async add(
			template: { name: string; headings: readonly string[]; layout: ToldLayout; createdBy: string },
			at: string
		): Promise<string> {
			const id = newId();
			await db('layout_templates').insert({
				id,
				practice_id: scope.practiceId,
				name: template.name,
				headings_json: JSON.stringify(template.headings),
				layout_json: JSON.stringify(template.layout),
				created_by: template.createdBy,
				created_at: at,
				updated_at: at,
				last_used_at: at,
				used_count: 1,
				archived_at: null
			});
			return id;
		},
		async rename(id: string, name: string, at: string): Promise<void> {
			await mine().where({ id }).update({ name, updated_at: at });
		},
		async setArchived(id: string, archivedAt: string | null, at: string): Promise<void> {
			await mine().where({ id }).update({ archived_at: archivedAt, updated_at: at });
		},
		async noteUse(id: string, at: string): Promise<void> {
			await mine().where({ id }).update({ last_used_at: at }).increment('used_count', 1);
		}
	};
}
