import type { Actor } from '../../access/access';
import { handleOf } from '../../recording/capture-handle';
import {
	contradictions,
	parseToldLayout,
	toldLayoutSchema,
	type Contradiction,
	type ToldLayout
} from '../../recording/readers/delimited-text/table-layout-told';
import {
	guessColumns,
	guessLayout,
	type LayoutGuess
} from '../../recording/readers/delimited-text/guess-layout';
import { fitLayout, likelyTemplates } from '../../recording/readers/delimited-text/layout-likeness';
import {
	previewTable,
	type FileEnds,
	type TablePreview
} from '../../recording/readers/delimited-text/preview-table';
import { columnHeadings, openText } from '../../recording/readers/delimited-text/read-delimited-text';
import { AppError, requireFound } from '../app-error';
import { appendAudit } from '../audit/audit-log';
import { requirePermission } from '../auth/require-permission';
import { withTransaction, type Db } from '../db/database';
import type { CaptureRow } from '../db/rows';
import { assessSurvey } from '../jobs/assess-survey.job';
import { readTable } from '../jobs/read-table.job';
import { captureSurvey, surveyJobs } from '../read-models/capture-list';
import { analysesRepository } from '../repositories/analyses.repository';
import { capturesRepository } from '../repositories/captures.repository';
import { layoutTemplatesRepository, type LayoutTemplate } from '../repositories/layout-templates.repository';
import { scopeOf } from '../repositories/scope';
import type { ServiceDeps } from '../service-deps';

/** What a preview looks at, from either end of a file. */
const HEAD_BYTES = 262_144;
const TAIL_BYTES = 65_536;
const LONGEST_TEMPLATE_NAME = 80;

/** Everything that the screen shows about one way of reading a table. */
export interface ToldTable {
	layout: ToldLayout;
	/** [columns] as written. */
	headings: string[];
	/** Why the guess says what it says; of the same columns. */
	reasons: LayoutGuess['reasons'];
	columnReasons: string[];
	/** Settings that cannot be so at once. */
	contradictions: Contradiction[];
	preview: TablePreview;
}

export interface OfferedTemplate {
	id: string;
	name: string;
	/** 0 to 1. */
	likeness: number;
	layout: ToldLayout;
}

export interface TablePage {
	surveyId: string;
	capture: Pick<CaptureRow, 'id' | 'name' | 'status' | 'kind' | 'problem'>;
	fileName: string;
	fileCount: number;
	isTold: boolean;
	isAnalysed: boolean;
	templateName: string | null;
	table: ToldTable;
	offers: OfferedTemplate[];
}

/** Tables of text: how they are read, seen before it is done, and kept for the next one of their kind. */
export function createTablesService({ db, blobs, jobs, clock }: ServiceDeps) {
	async function tableCapture(trx: Db, actor: Actor, captureId: string): Promise<CaptureRow> {
		const capture = requireFound(await capturesRepository(trx, scopeOf(actor)).byId(captureId), 'capture');
		if (capture.format !== 'delimited text')
			throw new AppError(
				'conflict',
				`${capture.name} is no table of text: its format says what its channels are.`
			);
		return capture;
	}

	async function endsOf(actor: Actor, captureId: string): Promise<{ ends: FileEnds; fileCount: number }> {
		const files = await capturesRepository(db, scopeOf(actor)).filesOf([captureId]);
		const file = requireFound(files[0], 'file');
		const isShort = file.size_bytes <= HEAD_BYTES;
		const head = await blobs.readSlice(file.sha256, 0, HEAD_BYTES);
		const tail = isShort
			? head
			: await blobs.readSlice(file.sha256, file.size_bytes - TAIL_BYTES, TAIL_BYTES);
		return {
			ends: { name: file.name, size_bytes: file.size_bytes, head: bytesOf(head), tail: bytesOf(tail) },
			fileCount: files.length
		};
	}

	/** One way of reading, as the screen shows it. `columnsAnew` guesses the columns for the writing that was told. */
	function toldTable(
		ends: FileEnds,
		asked: ToldLayout,
		columnsAnew: boolean,
		nominalFrequency_Hz: number
	): ToldTable {
		const opened = openText(handleOf({ name: ends.name, bytes: ends.head }), asked);
		if (!opened.ok) throw new AppError('invalid', opened.problem.sentence);
		const { head } = opened.value;
		const guess = guessColumns(ends.name, head, asked);
		const layout = columnsAnew ? { ...guess.layout, encoding: asked.encoding } : asked;
		const found = contradictions(layout);
		return {
			layout,
			headings: columnHeadings(layout, head.lines),
			reasons: guess.reasons,
			columnReasons: guess.columnReasons,
			contradictions: found,
			preview: previewTable(ends, layout, nominalFrequency_Hz)
		};
	}

	async function page(actor: Actor, surveyId: string, captureId: string): Promise<TablePage | null> {
		requirePermission(actor, 'capture.write');
		const scope = scopeOf(actor);
		const survey = requireFound(await captureSurvey(db, scope, surveyId), 'survey');
		const capture = requireFound(await capturesRepository(db, scope).byId(captureId), 'capture');
		if (capture.survey_id !== survey.id) return requireFound<never>(null, 'capture');
		if (capture.format !== 'delimited text') return null;
		const { ends, fileCount } = await endsOf(actor, captureId);
		const opened = openText(handleOf({ name: ends.name, bytes: ends.head }), undefined);
		if (!opened.ok) throw new AppError('invalid', opened.problem.sentence);
		const { head } = opened.value;
		const guess = guessLayout(ends.name, head);
		const layout = capture.layout_json === null ? guess?.layout : parseToldLayout(capture.layout_json);
		const templates = layoutTemplatesRepository(db, scope);
		const headings = guess === null ? [] : columnHeadings(guess.layout, head.lines);
		const used =
			capture.layout_template_id === null ? null : await templates.byId(capture.layout_template_id);
		return {
			surveyId: survey.id,
			capture: {
				id: capture.id,
				name: capture.name,
				status: capture.status,
				kind: capture.kind,
				problem: capture.problem
			},
			fileName: ends.name,
			fileCount,
			isTold: capture.layout_json !== null,
			isAnalysed: (await analysesRepository(db, scope).currentOf(captureId)) !== null,
			templateName: used?.name ?? null,
			table: toldTable(ends, layout ?? PLAIN_LAYOUT, layout === undefined, survey.facts.nominalFrequency_Hz),
			offers:
				guess === null
					? []
					: likelyTemplates(await templates.inUse(), headings).map(({ template, likeness }) => ({
							id: template.id,
							name: template.name,
							likeness,
							layout: fitLayout(template, headings, guess.layout)
						}))
		};
	}

	/** What a layout would make of a capture's file; reads its two ends only. */
	async function preview(
		actor: Actor,
		captureId: string,
		asked: ToldLayout,
		columnsAnew: boolean
	): Promise<ToldTable> {
		requirePermission(actor, 'capture.write');
		const capture = await tableCapture(db, actor, captureId);
		const survey = requireFound(await captureSurvey(db, scopeOf(actor), capture.survey_id), 'survey');
		const { ends } = await endsOf(actor, captureId);
		return toldTable(ends, asked, columnsAnew, survey.facts.nominalFrequency_Hz);
	}

	/** Keeps what was told and queues the reading by it. Mappings and readings of an earlier understanding no longer count. */
	async function apply(
		actor: Actor,
		surveyId: string,
		captureId: string,
		told: unknown,
		template: { keepAs: string | null; usedId: string | null }
	): Promise<string> {
		requirePermission(actor, 'capture.write');
		const capture = await tableCapture(db, actor, captureId);
		if (capture.survey_id !== surveyId) return requireFound<never>(null, 'capture');
		const layout = toldLayoutSchema.safeParse(told);
		if (!layout.success)
			throw new AppError(
				'invalid',
				layout.error.issues[0]?.message ?? 'The table is not told completely yet.'
			);
		const { ends } = await endsOf(actor, captureId);
		const head = previewTable(ends, layout.data, null);
		if (head.problem) throw new AppError('invalid', head.problem.sentence);
		const keepAs = template.keepAs === null ? null : templateName(template.keepAs);
		const headings = headingsOf(ends, layout.data);
		return withTransaction(db, async (trx) => {
			const scope = scopeOf(actor);
			const work = await surveyJobs(trx, scope, surveyId, clock());
			if (work.some((job) => job.captureId === captureId && job.status !== 'failed'))
				throw new AppError(
					'conflict',
					'This capture is being worked on. Wait until that is done, or cancel it, and tell the columns again.'
				);
			const now = clock();
			const templates = layoutTemplatesRepository(trx, scope);
			const used = template.usedId === null ? null : await templates.byId(template.usedId);
			const templateId =
				keepAs === null
					? (used?.id ?? null)
					: await keep(trx, actor, { name: keepAs, headings, layout: layout.data });
			if (keepAs === null && used) await templates.noteUse(used.id, now.toISOString());
			await capturesRepository(trx, scope).update(
				captureId,
				{
					status: 'unread',
					problem: null,
					mappings_json: null,
					layout_json: JSON.stringify(layout.data),
					layout_template_id: templateId
				},
				now
			);
			if (
				capture.status === 'analysed' ||
				(await analysesRepository(trx, scope).currentOf(captureId)) !== null
			) {
				await analysesRepository(trx, scope).retire(captureId);
				await jobs.enqueue(trx, assessSurvey, { surveyId }, { practiceId: actor.practiceId });
			}
			await appendAudit(
				trx,
				actor,
				{
					action: 'capture.columns-told',
					subjectKind: 'capture',
					subjectId: captureId,
					detail: { content: layout.data.content, columns: layout.data.columns.length, keptAs: keepAs }
				},
				now
			);
			return jobs.enqueue(trx, readTable, { surveyId, captureId }, { practiceId: actor.practiceId });
		});
	}

	async function keep(
		trx: Db,
		actor: Actor,
		template: { name: string; headings: string[]; layout: ToldLayout }
	): Promise<string> {
		const now = clock();
		const templates = layoutTemplatesRepository(trx, scopeOf(actor));
		await refuseTakenName(templates, template.name, null);
		const id = await templates.add(
			{
				...template,
				layout: { ...template.layout, time: { ...template.layout.time, start: null } },
				createdBy: actor.userId
			},
			now.toISOString()
		);
		await appendAudit(
			trx,
			actor,
			{
				action: 'layout-template.kept',
				subjectKind: 'layout-template',
				subjectId: id,
				detail: { name: template.name }
			},
			now
		);
		return id;
	}

	async function refuseTakenName(
		templates: ReturnType<typeof layoutTemplatesRepository>,
		name: string,
		exceptId: string | null
	): Promise<void> {
		const twin = (await templates.inUse()).find(
			(one) => one.id !== exceptId && one.name.toLowerCase() === name.toLowerCase()
		);
		if (twin)
			throw new AppError(
				'invalid',
				`There is already a template called “${twin.name}”. Choose another name, or archive that one first.`
			);
	}

	/** Templates of the practice, those in use first. */
	async function templates(
		actor: Actor
	): Promise<(Omit<LayoutTemplate, 'layout'> & { content: string; columnCount: number })[]> {
		requirePermission(actor, 'capture.read');
		const all = await layoutTemplatesRepository(db, scopeOf(actor)).all();
		return all.map(({ layout, ...template }) => ({
			...template,
			content: layout.content,
			columnCount: layout.columns.length
		}));
	}

	async function renameTemplate(actor: Actor, templateId: string, rawName: string): Promise<void> {
		requirePermission(actor, 'capture.write');
		const name = templateName(rawName);
		await withTransaction(db, async (trx) => {
			const repository = layoutTemplatesRepository(trx, scopeOf(actor));
			const template = requireFound(await repository.byId(templateId), 'template');
			if (template.name === name) return;
			await refuseTakenName(repository, name, template.id);
			const now = clock();
			await repository.rename(template.id, name, now.toISOString());
			await appendAudit(
				trx,
				actor,
				{
					action: 'layout-template.renamed',
					subjectKind: 'layout-template',
					subjectId: template.id,
					detail: { name: { from: template.name, to: name } }
				},
				now
			);
		});
	}

	async function setTemplateArchived(actor: Actor, templateId: string, archived: boolean): Promise<void> {
		requirePermission(actor, 'capture.write');
		await withTransaction(db, async (trx) => {
			const repository = layoutTemplatesRepository(trx, scopeOf(actor));
			const template = requireFound(await repository.byId(templateId), 'template');
			if (!archived) await refuseTakenName(repository, template.name, template.id);
			const now = clock();
			await repository.setArchived(template.id, archived ? now.toISOString() : null, now.toISOString());
			await appendAudit(
				trx,
				actor,
				{
					action: archived ? 'layout-template.archived' : 'layout-template.restored',
					subjectKind: 'layout-template',
					subjectId: template.id,
					detail: { name: template.name }
				},
				now
			);
		});
	}

	return { page, preview, apply, templates, renameTemplate, setTemplateArchived };
}

/** Where nothing at all could be guessed, a person begins with this. */
const PLAIN_LAYOUT: ToldLayout = {
	encoding: 'as-found',
	separator: ',',
	decimal: '.',
	grouping: 'none',
	headingLines: [1],
	unitsLine: null,
	firstDataLine: 2,
	content: 'trend',
	time: {
		format: 'none',
		samplingRate_Hz: null,
		interval_s: null,
		zone: { kind: 'site' },
		start: null,
		marks: 'start'
	},
	columns: [{ role: 'ignore' }]
};

function templateName(raw: string): string {
	const name = raw.trim();
	if (name === '') throw new AppError('invalid', 'Give the template a name by which you will know it again.');
	if (name.length > LONGEST_TEMPLATE_NAME)
		throw new AppError('invalid', `The name is longer than ${LONGEST_TEMPLATE_NAME} characters. Shorten it.`);
	return name;
}

function headingsOf(ends: FileEnds, layout: ToldLayout): string[] {
	const opened = openText(handleOf({ name: ends.name, bytes: ends.head }), layout);
	return opened.ok ? columnHeadings(layout, opened.value.head.lines) : [];
}

function bytesOf(buffer: Buffer): Uint8Array {
	return new Uint8Array(buffer.buffer, buffer.byteOffset, buffer.byteLength);
}
