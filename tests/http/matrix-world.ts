import { join } from 'node:path';
import type { Actor, Role } from '$lib/access/access';
import type { Config } from '$lib/server/config';
import { buildContainer, type Container } from '$lib/server/container';
import type { Db } from '$lib/server/db/database';
import { newId } from '$lib/server/db/ids';
import { createDiskBlobStore } from '$lib/server/storage/disk-blob-store';
import { issuedReport, NOW, personOf, practiceWithOwner } from '../support/practice-world';
import { comtradeCapture, confirmAsSuggested, onlyCapture, upload, workOff } from '../server/captures-world';

/** One id for every [parameter] that a route may have. */
export type Ids = Readonly<Record<string, string>>;

export interface MatrixWorld {
	people: Record<Role, Actor>;
	/** Of the practice and the client that the people act for. */
	own: Ids;
	/** Of another client of the same practice. */
	neighbours: Ids;
	/** Of another practice. */
	foreign: Ids;
	foreignPracticeId: string;
}

/** One of everything for one client: analysed capture, issued report, question, action, instrument, own limit set. */
async function oneOfEverything(container: Container, owner: Actor, clientName: string): Promise<Ids> {
	const { db } = container;
	const blobs = createDiskBlobStore(join(container.config.dataDir, 'blobs'));
	const pdf = await blobs.put(new TextEncoder().encode(`%PDF-1.7 ${clientName}`));
	const made = await issuedReport(db, owner, clientName, pdf);
	const own = { practice_id: owner.practiceId, client_id: made.clientId };
	await upload(container, owner, made.surveyId, comtradeCapture(0.5));
	await workOff(container);
	const capture = await onlyCapture(db, made.surveyId);
	const job = await confirmAsSuggested(container, owner, made.surveyId, capture);
	await workOff(container);
	const file = await db('capture_files').where({ capture_id: capture }).first();
	const waiting = await container.services.uploads.receive(
		owner,
		made.surveyId,
		'later.csv',
		new Blob(['t,u\n']).stream() as unknown as Parameters<typeof container.services.uploads.receive>[3]
	);
	const session = await container.services.receiving.announce(owner, made.surveyId, {
		name: 'under-way.dat',
		size_bytes: 10,
		sha256: null
	});
	const ids = {
		instrument: newId(),
		sensor: newId(),
		certificate: newId(),
		query: newId(),
		action: newId(),
		mail: newId()
	};
	await db('instruments').insert({
		id: ids.instrument,
		practice_id: owner.practiceId,
		name: `Recorder of ${clientName}`,
		model: 'R1',
		serial_number: '1',
		harmonic_class: 'I',
		created_at: NOW
	});
	await db('sensors').insert({
		id: ids.sensor,
		practice_id: owner.practiceId,
		name: `Clamp of ${clientName}`,
		kind: 'clamp',
		created_at: NOW
	});
	await db('calibrations').insert({
		id: ids.certificate,
		practice_id: owner.practiceId,
		sensor_id: ids.sensor,
		certificate_number: 'C-1',
		calibrated_on: '2026-01-05',
		due_on: '2027-01-05',
		certificate_sha256: pdf.sha256,
		certificate_file_name: 'certificate.pdf',
		created_at: NOW
	});
	await db('queries').insert({
		id: ids.query,
		...own,
		revision_id: made.revisionId,
		asked_by: owner.userId,
		status: 'open',
		created_at: NOW,
		updated_at: NOW
	});
	await db('actions').insert({
		id: ids.action,
		...own,
		site_id: made.siteId,
		survey_id: made.surveyId,
		position: 1,
		title: 'Ask the supplier for line reactors',
		priority: 'normal',
		side: 'client',
		status: 'open',
		published_at: NOW,
		created_at: NOW
	});
	await db('mail_outbox').insert({
		id: ids.mail,
		practice_id: owner.practiceId,
		template: 'invitation',
		to_email: 'somebody@example.com',
		subject: 'A mail',
		text: 'Text',
		html: '<p>Text</p>',
		status: 'sent',
		next_attempt_at: NOW,
		created_at: NOW
	});
	const [set] = await db('limit_sets')
		.insert({
			key: `own-${made.surveyId}`,
			practice_id: owner.practiceId,
			standard: 'Contract',
			edition: '1',
			title: `Contract of ${clientName}`,
			publisher: '',
			jurisdiction: '',
			status: 'current',
			notes_json: '[]',
			source_sha256: 'none',
			created_at: NOW
		})
		.returning('id');
	return {
		client: made.clientId,
		site: made.siteId,
		point: made.pointId,
		survey: made.surveyId,
		report: made.reportId,
		revision: made.revisionId,
		assessment: made.assessmentId,
		capture,
		job,
		file: file?.id ?? '',
		upload: waiting.id,
		session,
		limitSet: String(set?.id),
		level: '0',
		tile: '0',
		token: 'x'.repeat(43),
		...ids
	};
}

export async function buildMatrixWorld(db: Db, config: Config): Promise<MatrixWorld> {
	const container = buildContainer({ ...config, logLevel: 'silent' }, 'script', { db });
	const owner = await practiceWithOwner(db, 'Alder');
	const stranger = await practiceWithOwner(db, 'Birch');
	const own = await oneOfEverything(container, owner, 'Millbrook');
	const neighbours = await oneOfEverything(container, owner, 'Fernside');
	const foreign = await oneOfEverything(container, stranger, 'Foxholt');
	const person = (name: string, role: Role, clientId: string | null) =>
		personOf(db, owner.practiceId, 'Alder', name, role, clientId);
	return {
		people: {
			owner,
			engineer: await person('Ed', 'engineer', null),
			checker: await person('Cora', 'checker', null),
			client: await person('Sam', 'client', own['client'] ?? '')
		},
		own,
		neighbours,
		foreign,
		foreignPracticeId: stranger.practiceId
	};
}
