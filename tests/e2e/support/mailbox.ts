import type { Page } from 'playwright-core';

/** Opens the newest mail to an address whose subject fits, in the local mailbox, and answers the link of the product in it. */
export async function linkFromMail(page: Page, to: string, subject: RegExp): Promise<string> {
	for (let tries = 0; tries < 60; tries++) {
		await page.goto('/mailbox');
		const mail = page
			.getByRole('main')
			.getByRole('link')
			.filter({ hasText: to })
			.filter({ hasText: subject })
			.first();
		if ((await mail.count()) > 0) {
			await mail.click();
			await page.waitForURL(/\/mailbox\/./);
			const href = await page
				.getByRole('main')
				.getByRole('link', { name: /^https?:\/\// })
				.first()
				.getAttribute('href');
			if (href) return href;
		}
		await page.waitForTimeout(250);
	}
	throw new Error(`no mail to ${to} about ${subject} within 15 s`);
}
