import type { Actor } from '../../access/access';
import type { Letterhead } from '../../register/letterhead';
import { phaseNamesSchema } from '../../register/point-facts';
import { AppError, requireFound } from '../app-error';
import { appendAudit } from '../audit/audit-log';
import { requirePermission } from '../auth/require-permission';
import { withTransaction } from '../db/database';
import type { AuditEventRow, OutboxMailRow, PracticeRow } from '../db/rows';
import {
	auditChoices,
	listAudit,
	type AuditChoices,
	type AuditFilter,
	type AuditSort
} from '../read-models/audit-list';
import type { ListPage, ListQuery } from '../read-models/list-query';
import { listMail, type MailLine, type MailSort } from '../read-models/mail-list';
import { mailOutboxRepository } from '../repositories/mail-outbox.repository';
import { practiceRepository, type PracticeSettings } from '../repositories/practice.repository';
import { largestCaptures, storageUse, type LargeCapture, type StorageUse } from '../read-models/storage-use';
import type { ServiceDeps } from '../service-deps';

function toLetterhead(row: PracticeRow): Letterhead {
	const names = phaseNamesSchema.parse(JSON.parse(row.phase_names_json));
	return {
		name: row.name,
		shortName: row.short_name,
		reportPrefix: row.report_prefix,
		address: row.address,
		phone: row.phone,
		email: row.email,
		paper: row.paper,
		timeZone: row.time_zone,
		phaseL1: names.L1,
		phaseL2: names.L2,
		phaseL3: names.L3,
		phaseN: names.N,
		allowSelfCheck: row.allow_self_check === 1,
		relianceStatement: row.reliance_statement
	};
}

function toSettings(letterhead: Letterhead): PracticeSettings {
	return {
		name: letterhead.name,
		short_name: letterhead.shortName,
		report_prefix: letterhead.reportPrefix,
		address: letterhead.address,
		phone: letterhead.phone,
		email: letterhead.email,
		paper: letterhead.paper,
		time_zone: letterhead.timeZone,
		phase_names_json: JSON.stringify({
			L1: letterhead.phaseL1,
			L2: letterhead.phaseL2,
			L3: letterhead.phaseL3,
			N: letterhead.phaseN
		}),
		allow_self_check: letterhead.allowSelfCheck ? 1 : 0,
		reliance_statement: letterhead.relianceStatement
	};
}

/** Names of the entries that differ, with both values: what the history shows. */
function changes(before: Letterhead, after: Letterhead): Record<string, { from: unknown; to: unknown }> {
	const names = Object.keys(after) as (keyof Letterhead)[];
	return Object.fromEntries(
		names
			.filter((name) => before[name] !== after[name])
			.map((name) => [name, { from: before[name], to: after[name] }])
	);
}

const LARGEST_SHOWN = 12;

/** The owner's own area: letterhead and house rules, outgoing mail, history. */
export function createPracticeService({ db, clock, config }: ServiceDeps) {
	async function letterhead(actor: Actor): Promise<Letterhead> {
		requirePermission(actor, 'practice.manage');
		return toLetterhead(await practiceRepository(db, actor).get());
	}

	async function saveLetterhead(actor: Actor, wanted: Letterhead): Promise<void> {
		requirePermission(actor, 'practice.manage');
		await withTransaction(db, async (trx) => {
			const practice = practiceRepository(trx, actor);
			const detail = changes(toLetterhead(await practice.get()), wanted);
			if (Object.keys(detail).length === 0) return;
			await practice.update(toSettings(wanted));
			await appendAudit(
				trx,
				actor,
				{ action: 'practice.changed', subjectKind: 'practice', subjectId: actor.practiceId, detail },
				clock()
			);
		});
	}

	/** Room that originals take, and what of it the practice may set itself: never more than the installation gives. */
	async function storage(
		actor: Actor
	): Promise<{ use: StorageUse; largest: LargeCapture[]; installationQuota_bytes: number | null }> {
		requirePermission(actor, 'practice.manage');
		return {
			use: await storageUse(db, config, actor.practiceId),
			largest: await largestCaptures(db, actor.practiceId, LARGEST_SHOWN),
			installationQuota_bytes: config.storageQuota_bytes
		};
	}

	async function setStorageQuota(actor: Actor, quota_bytes: number | null): Promise<void> {
		requirePermission(actor, 'practice.manage');
		const most_bytes = config.storageQuota_bytes;
		if (quota_bytes !== null && most_bytes !== null && quota_bytes > most_bytes)
			throw new AppError(
				'invalid',
				`This installation gives a practice at most ${most_bytes / 1e9} GB. Enter that or less, or leave the field empty.`
			);
		await withTransaction(db, async (trx) => {
			const practice = practiceRepository(trx, actor);
			const { storage_quota_bytes: from } = await practice.get();
			if (from === quota_bytes) return;
			await practice.setStorageQuota(quota_bytes);
			await appendAudit(
				trx,
				actor,
				{
					action: 'practice.changed',
					subjectKind: 'practice',
					subjectId: actor.practiceId,
					detail: { storageQuota_bytes: { from, to: quota_bytes } }
				},
				clock()
			);
		});
	}

	async function outbox(
		actor: Actor,
		query: ListQuery<MailSort> & { status: OutboxMailRow['status'] | null }
	): Promise<ListPage<MailLine>> {
		requirePermission(actor, 'practice.manage');
		return listMail(db, actor.practiceId, query);
	}

	async function retryMail(actor: Actor, mailId: string): Promise<void> {
		requirePermission(actor, 'practice.manage');
		await withTransaction(db, async (trx) => {
			const mails = mailOutboxRepository(trx, actor);
			const mail = requireFound(await mails.byId(mailId), 'mail');
			if ((await mails.retry(mail.id, clock().toISOString())) === 0)
				throw new AppError('conflict', 'This mail has not failed; there is nothing to send again.');
			await appendAudit(
				trx,
				actor,
				{ action: 'mail.retried', subjectKind: 'mail', subjectId: mail.id, detail: { to: mail.to_email } },
				clock()
			);
		});
	}

	async function history(
		actor: Actor,
		query: ListQuery<AuditSort> & AuditFilter
	): Promise<{ page: ListPage<AuditEventRow>; choices: AuditChoices }> {
		requirePermission(actor, 'practice.manage');
		return {
			page: await listAudit(db, actor.practiceId, query),
			choices: await auditChoices(db, actor.practiceId)
		};
	}

	return { letterhead, saveLetterhead, storage, setStorageQuota, outbox, retryMail, history };
}
