import { AppError, requireFound } from '../app-error';
import { localMail, localMails, type LocalMailLine } from '../read-models/local-mailbox';
import type { OutboxMailRow } from '../db/rows';
import type { ServiceDeps } from '../service-deps';

/**
 * The local mailbox: every mail of this installation, for anybody who opens the page. It exists only where mail
 * goes nowhere (no SMTP settings) and never in production; elsewhere it is not found.
 */
export function createMailboxService({ db, config }: ServiceDeps) {
	function assertVisible(): void {
		if (!config.mailboxVisible)
			throw new AppError(
				'not-found',
				'There is no page at this address. Check the address, or go back to the start.'
			);
	}

	async function list(): Promise<LocalMailLine[]> {
		assertVisible();
		return localMails(db);
	}

	async function byId(id: string): Promise<OutboxMailRow> {
		assertVisible();
		return requireFound(await localMail(db, id), 'mail');
	}

	return { list, byId };
}
