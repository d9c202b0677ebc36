import { createHash } from 'node:crypto';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { canonicalJson, measuredDataText } from '$lib/report/measured-data';
import type { ReportModel } from '$lib/report/report-model';
import { issued, openReportsWorld, reportInCheck, type ReportsWorld } from './reports-world';
import { workOff } from './captures-world';

let world: ReportsWorld;
beforeEach(async () => {
	world = await openReportsWorld();
});
afterEach(() => world.close());

const services = () => world.container.services;
const revisionRow = async (id: string) => (await world.db('report_revisions').where({ id }).first())!;
const sha256 = (text: string) => createHash('sha256').update(text).digest('hex');

describe('a draft', () => {
	it('starts from the verdict, once', async () => {
		const first = await services().reports.createDraft(world.engineer, world.surveyId);
		expect(await services().reports.createDraft(world.checker, world.surveyId)).toBe(first);
		const row = await revisionRow(first);
		expect(row.status).toBe('draft');
		expect(row.summary).not.toBe('');
		expect(JSON.parse(row.findings_json)).not.toEqual([]);
	});

	it('refuses the second of two people who save from the same edition, and keeps the first text', async () => {
		const id = await services().reports.createDraft(world.engineer, world.surveyId);
		const words = { title: 'Report', findings: ['One.'], edition: 1 };
		await services().reports.save(world.engineer, id, { ...words, summary: 'First.' });
		await expect(
			services().reports.save(world.checker, id, { ...words, summary: 'Second.' })
		).rejects.toMatchObject({ code: 'conflict', status: 409 });
		expect((await revisionRow(id)).summary).toBe('First.');
	});

	it('cannot be sent for check after the point has changed under its verdict', async () => {
		const id = await services().reports.createDraft(world.engineer, world.surveyId);
		await world
			.db('points')
			.where({ id: world.pointId })
			.update({ demand_json: '{"method":"entered","demandCurrent_A":500,"source":"meter"}' });
		await expect(services().reports.sendForCheck(world.engineer, id)).rejects.toMatchObject({
			code: 'conflict'
		});
		await services().assessments.refresh(world.engineer, world.surveyId);
		await expect(services().reports.sendForCheck(world.engineer, id)).rejects.toMatchObject({
			code: 'conflict'
		});
		await services().reports.useCurrentVerdict(world.engineer, id);
		await services().reports.sendForCheck(world.engineer, id);
		expect((await revisionRow(id)).status).toBe('in-check');
	});

	it('gets a preview marked as a draft, and the same one again while nothing changed', async () => {
		const id = await services().reports.createDraft(world.engineer, world.surveyId);
		await services().reports.preview(world.engineer, id);
		await workOff(world.container);
		const first = await revisionRow(id);
		expect(first.pdf_pages).toBeGreaterThan(8);
		expect(first.status).toBe('draft');
		await services().reports.preview(world.engineer, id);
		await workOff(world.container);
		expect((await revisionRow(id)).pdf_sha256).toBe(first.pdf_sha256);
		expect((await services().reports.page(world.engineer, world.surveyId)).previewCurrent).toBe(true);
		await expect(services().reports.pdf(world.client, id)).rejects.toMatchObject({ code: 'not-found' });
	});
});

describe('the check', () => {
	it('is never the author’s own, unless the practice allows it and the report says so', async () => {
		const id = await reportInCheck(world, world.checker);
		await expect(services().reports.issue(world.checker, id)).rejects.toMatchObject({ code: 'forbidden' });
		await world.db('practices').where({ id: world.owner.practiceId }).update({ allow_self_check: 1 });
		await services().reports.issue(world.checker, id);
		await workOff(world.container);
		const model = JSON.parse((await revisionRow(id)).model_json!) as ReportModel;
		expect(model.document.selfChecked).toBe(true);
		expect(model.document.checkedBy).toBe(model.document.preparedBy);
	});

	it('needs the right to check', async () => {
		const id = await reportInCheck(world);
		await expect(services().reports.issue(world.engineer, id)).rejects.toMatchObject({ code: 'forbidden' });
		await expect(services().reports.returnToAuthor(world.engineer, id, 'No.')).rejects.toMatchObject({
			code: 'forbidden'
		});
	});

	it('closes the draft to editing, and a return opens it again with the note', async () => {
		const id = await reportInCheck(world);
		const words = { title: 'T', summary: 'S', findings: [], edition: 1 };
		await expect(services().reports.save(world.engineer, id, words)).rejects.toMatchObject({
			code: 'conflict'
		});
		await services().reports.returnToAuthor(world.checker, id, 'Name the feeder.');
		const row = await revisionRow(id);
		expect([row.status, row.check_note]).toEqual(['returned', 'Name the feeder.']);
		await services().reports.save(world.engineer, id, { ...words, edition: row.edition });
	});

	it('does not issue what was returned while the work waited', async () => {
		const id = await reportInCheck(world);
		await services().reports.issue(world.checker, id);
		await services().reports.returnToAuthor(world.checker, id, 'Wait.');
		await workOff(world.container);
		expect((await revisionRow(id)).status).toBe('returned');
		expect(await world.db('mail_outbox').where({ template: 'report-issued' })).toEqual([]);
	});
});

describe('the issue', () => {
	it('numbers, freezes, publishes, mails the client’s people and writes history', async () => {
		await services().actions.add(world.engineer, world.surveyId, {
			title: 'Fit line reactors',
			detail: '',
			priority: 'urgent',
			side: 'client',
			responsible: '',
			dueOn: ''
		});
		const id = await issued(world);
		const row = await revisionRow(id);
		const report = await world.db('reports').where({ id: row.report_id }).first();
		expect(row.status).toBe('issued');
		expect(report?.number).toBe('TA-2026-0001');
		const model = JSON.parse(row.model_json!) as ReportModel;
		expect(row.model_sha256).toBe(sha256(canonicalJson(model)));
		expect(row.data_sha256).toBe(sha256(measuredDataText(model)));
		expect(model.document.number).toBe('TA-2026-0001');
		const pdf = await world.container.blobs.read(row.pdf_sha256!);
		expect(pdf.subarray(0, 5).toString()).toBe('%PDF-');
		const mails = await world.db('mail_outbox').where({ template: 'report-issued' });
		expect(mails.map((mail) => mail.to_email)).toEqual([world.client.email]);
		expect(mails[0]?.text).toContain(`https://pq.example/portal/reports/${id}`);
		expect((await world.db('actions').where({ survey_id: world.surveyId }))[0]?.published_at).toBe(
			row.issued_at
		);
		const audit = await world.db('audit_events').where({ action: 'report.issued', subject_id: id });
		expect(audit.map((event) => event.actor_name)).toEqual([world.checker.name]);
	});

	it('carries the hashes of the captures, the engine and the limit rows', async () => {
		const id = await issued(world);
		const { lineage } = JSON.parse((await revisionRow(id)).model_json!) as ReportModel;
		const files = await world.db('capture_files').pluck('sha256');
		expect(lineage.captures.flatMap((capture) => capture.files.map((file) => file.sha256)).sort()).toEqual(
			files.sort()
		);
		expect(lineage.engineVersion).not.toBe('');
		expect(lineage.limitRows.length).toBeGreaterThan(5);
		expect(lineage.captures[0]?.channels.length).toBe(7);
	});

	it('prints the values that the verdict rests on', async () => {
		const id = await issued(world);
		const row = await revisionRow(id);
		const model = JSON.parse(row.model_json!) as ReportModel;
		const fifth = model.tables
			.find((table) => table.quantity === 'current')
			?.rules[0]?.rows.find((one) => one.order === 5);
		const stored = await world
			.db('verdict_rows')
			.where({ assessment_id: row.assessment_id, quantity: 'current', harmonic_order: 5 });
		expect(fifth?.cells.map((cell) => cell.value_pct).sort()).toEqual(
			stored.map((one) => one.value_pct).sort()
		);
		// 25 % of 400 A on 800 A demand is 12.5 %; 7 % is allowed at I_sc/I_L 31 (IEEE Std 519-2022, table 2).
		expect(fifth?.verdict).toBe('exceeds');
		expect(fifth?.cells[0]?.value_pct).toBeCloseTo(12.5, 1);
	});

	it('cannot be changed afterwards, not even past the services', async () => {
		const id = await issued(world);
		const words = { title: 'T', summary: 'S', findings: [], edition: 1 };
		await expect(services().reports.save(world.engineer, id, words)).rejects.toMatchObject({
			code: 'conflict'
		});
		await expect(services().reports.sendForCheck(world.engineer, id)).rejects.toMatchObject({
			code: 'conflict'
		});
		await expect(world.db('report_revisions').where({ id }).update({ summary: 'Other.' })).rejects.toThrow(
			/immutable/
		);
		await expect(world.db('report_revisions').where({ id }).update({ status: 'draft' })).rejects.toThrow(
			/immutable/
		);
		await expect(world.db('report_revisions').where({ id }).delete()).rejects.toThrow(/kept/);
	});

	it('twice asked is done once', async () => {
		const id = await reportInCheck(world);
		const first = await services().reports.issue(world.checker, id);
		expect(await services().reports.issue(world.checker, id)).toBe(first);
		await workOff(world.container);
		expect(await world.db('mail_outbox').where({ template: 'report-issued' })).toHaveLength(1);
	});

	it('of revision B supersedes A under the same number', async () => {
		const a = await issued(world);
		const b = await services().reports.startRevision(world.engineer, a, 'Corrected site name');
		expect((await revisionRow(a)).status).toBe('issued');
		await services().reports.sendForCheck(world.engineer, b);
		await services().reports.issue(world.checker, b);
		await workOff(world.container);
		expect([(await revisionRow(a)).status, (await revisionRow(b)).status]).toEqual(['superseded', 'issued']);
		const model = JSON.parse((await revisionRow(b)).model_json!) as ReportModel;
		expect(model.document.revisions.map(({ revision, status }) => [revision, status])).toEqual([
			['A', 'superseded'],
			['B', 'issued']
		]);
		expect(model.document.number).toBe('TA-2026-0001');
		const earlier = JSON.parse((await revisionRow(a)).model_json!) as ReportModel;
		// Nothing measured changed, so the data hash did not either.
		expect(model.lineage.dataSha256).toBe(earlier.lineage.dataSha256);
	});
});

describe('withdrawal', () => {
	it('needs a reason, keeps the PDF and tells the client', async () => {
		const id = await issued(world);
		await expect(services().reports.withdraw(world.checker, id, ' ')).rejects.toMatchObject({
			code: 'invalid'
		});
		await services().reports.withdraw(world.checker, id, 'Wrong transformer ratio');
		const row = await revisionRow(id);
		expect([row.status, row.withdrawn_reason]).toEqual(['withdrawn', 'Wrong transformer ratio']);
		expect((await services().reports.pdf(world.client, id)).issued).toBe(true);
		const mails = await world.db('mail_outbox').where({ template: 'report-withdrawn' });
		expect(mails.map((mail) => mail.to_email)).toEqual([world.client.email]);
	});
});

describe('the PDF', () => {
	it('opens for its own practice and client, and for nobody else', async () => {
		const id = await issued(world);
		expect((await services().reports.pdf(world.client, id)).fileName).toBe('TA-2026-0001 rev A.pdf');
		expect((await services().reports.pdf(world.engineer, id)).issued).toBe(true);
		await expect(services().reports.pdf(world.neighbour, id)).rejects.toMatchObject({ code: 'not-found' });
		await expect(services().reports.pdf(world.stranger, id)).rejects.toMatchObject({ code: 'not-found' });
		await expect(services().reports.page(world.stranger, world.surveyId)).rejects.toMatchObject({
			code: 'not-found'
		});
		await expect(services().reports.page(world.client, world.surveyId)).rejects.toMatchObject({
			code: 'forbidden'
		});
	});
});
