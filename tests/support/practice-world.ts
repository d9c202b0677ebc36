import { mkdtempSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Actor, Role } from '$lib/access/access';
import { parseConfig } from '$lib/server/config';
import { buildContainer, type Container } from '$lib/server/container';
import type { Db } from '$lib/server/db/database';
import { newId } from '$lib/server/db/ids';
import { addPerson, addPractice } from '$lib/server/services/practice-setup';
import { openTestDatabase } from './test-database';

export const NOW = '2026-03-19T09:30:00.000Z';

export interface World {
	container: Container;
	db: Db;
	/** Moves the clock that every service reads. */
	setNow: (instant: string) => void;
	close: () => Promise<void>;
}

/** A container on a fresh database and folder, with a clock the test sets and no mail leaving it. */
export async function openWorld(): Promise<World> {
	let now = new Date(NOW);
	const dataDir = mkdtempSync(join(tmpdir(), 'sinewright-test-'));
	const db = await openTestDatabase();
	const container = buildContainer(
		parseConfig({
			SINEWRIGHT_MODE: 'test',
			DATA_DIR: dataDir,
			LOG_LEVEL: 'silent',
			ORIGIN: 'https://pq.example'
		}),
		'script',
		{ db, clock: () => now, mailTransport: async () => undefined }
	);
	return { container, db, setNow: (instant) => (now = new Date(instant)), close: () => db.destroy() };
}

export async function practiceWithOwner(db: Db, name: string): Promise<Actor> {
	const practiceId = await addPractice(
		db,
		{ name, shortName: name, reportPrefix: name.slice(0, 2).toUpperCase(), timeZone: 'UTC' },
		new Date(NOW)
	);
	return personOf(db, practiceId, name, `owner-of-${name}`, 'owner', null);
}

export async function personOf(
	db: Db,
	practiceId: string,
	practiceName: string,
	name: string,
	role: Role,
	clientId: string | null
): Promise<Actor> {
	const email = `${name.toLowerCase().replace(/[^a-z]+/g, '.')}@example.com`;
	const ids = await addPerson(
		db,
		{ practiceId, name, email, role, clientId, passwordHash: null },
		new Date(NOW)
	);
	return { ...ids, name, email, practiceId, practiceName, role, clientId };
}

/** One client with one site and one issued report, written straight into the tables. */
export async function issuedReport(
	db: Db,
	owner: Actor,
	clientName: string,
	/** The PDF in the store, where a test reads it; else a hash without content. */
	pdf?: { sha256: string; size_bytes: number }
) {
	const ids = {
		clientId: newId(),
		siteId: newId(),
		pointId: newId(),
		surveyId: newId(),
		assessmentId: newId(),
		reportId: newId(),
		revisionId: newId()
	};
	const practice_id = owner.practiceId;
	const stamp = { created_at: NOW };
	await db('clients').insert({ id: ids.clientId, practice_id, name: clientName, ...stamp });
	const own = { practice_id, client_id: ids.clientId };
	await db('sites').insert({
		id: ids.siteId,
		...own,
		name: `${clientName} site`,
		time_zone: 'Europe/Berlin',
		...stamp
	});
	await db('points').insert({
		id: ids.pointId,
		...own,
		site_id: ids.siteId,
		name: 'Intake',
		kind: 'pcc',
		system: 'four-wire',
		nominal_voltage_v: 400,
		nominal_frequency_hz: 50,
		demand_json: '{"method":"unknown"}',
		short_circuit_json: '{"method":"unknown"}',
		phase_names_json: '{"L1":"L1","L2":"L2","L3":"L3","N":"N"}',
		updated_at: NOW,
		...stamp
	});
	await db('surveys').insert({
		id: ids.surveyId,
		...own,
		site_id: ids.siteId,
		point_id: ids.pointId,
		number: `S-${ids.surveyId.slice(0, 4)}`,
		title: 'Survey',
		engineer_id: owner.userId,
		updated_at: NOW,
		...stamp
	});
	const [set] = await db('limit_sets')
		.insert({
			key: `set-${ids.surveyId}`,
			standard: 'Test set',
			edition: '1',
			title: 'Test set',
			publisher: '',
			jurisdiction: '',
			status: 'current',
			notes_json: '[]',
			source_sha256: 'none',
			...stamp
		})
		.returning('id');
	await db('assessments').insert({
		id: ids.assessmentId,
		...own,
		survey_id: ids.surveyId,
		limit_set_id: set?.id ?? 0,
		verdict: 'exceeds',
		evidence: 'weekly',
		advisory: 0,
		engine_version: '1.0.0',
		input_json: '{}',
		result_json: '{}',
		...stamp
	});
	await db('reports').insert({
		id: ids.reportId,
		...own,
		site_id: ids.siteId,
		survey_id: ids.surveyId,
		number: `XX-2026-${ids.reportId.slice(0, 4)}`,
		title: `Report for ${clientName}`,
		created_by: owner.userId,
		...stamp
	});
	const sha256 = pdf?.sha256 ?? ids.revisionId.replaceAll('-', '').padEnd(64, '0');
	await db('stored_files').insert({
		sha256,
		size_bytes: pdf?.size_bytes ?? 120_000,
		media_type: 'application/pdf',
		...stamp
	});
	await db('report_revisions').insert({
		id: ids.revisionId,
		...own,
		report_id: ids.reportId,
		revision: 'A',
		status: 'issued',
		assessment_id: ids.assessmentId,
		findings_json: '[]',
		prepared_by: owner.userId,
		issued_at: NOW,
		// No frozen model: pages then show the report without its verdict's picture.
		model_json: 'null',
		pdf_sha256: sha256,
		pdf_pages: 12,
		updated_at: NOW,
		...stamp
	});
	return { ...ids, pdfSha256: sha256 };
}
