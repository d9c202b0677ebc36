import { chromium, type Browser, type Page } from 'playwright-core';

/** Headless Debian Chromium, kept from calling home. */
export function launchChromium(): Promise<Browser> {
	return chromium.launch({
		executablePath: process.env['CHROMIUM_PATH'] ?? '/usr/bin/chromium',
		args: [
			'--no-sandbox',
			'--disable-gpu',
			'--disable-quic',
			'--disable-background-networking',
			'--disable-component-update',
			'--disable-sync'
		]
	});
}

/** Signs in as a person does; the page is then where that person begins. */
export async function signInAs(page: Page, email: string, password: string): Promise<void> {
	await page.goto('/sign-in');
	await page.getByLabel('E-mail').fill(email);
	await page.getByLabel('Password', { exact: true }).fill(password);
	await page.getByRole('button', { name: 'Sign in', exact: true }).click();
	await page.waitForURL((url) => !url.pathname.startsWith('/sign-in'));
}

/** Waits until an address answers; gives up after two minutes. */
export async function waitUntilUp(address: string): Promise<void> {
	for (let tries = 0; tries < 600; tries++) {
		const isUp = await fetch(address).then(
			(response) => response.ok,
			() => false
		);
		if (isUp) return;
		await new Promise((resolve) => setTimeout(resolve, 200));
	}
	throw new Error(`${address} did not come up within two minutes`);
}
