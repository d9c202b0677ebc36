import { existsSync } from 'node:fs';
import { AxeBuilder } from '@axe-core/playwright';
import { chromium, type Browser, type BrowserContext, type Page } from 'playwright-core';
import { expect, inject } from 'vitest';
import { PASSWORD } from './people';

const executablePath = [process.env['CHROMIUM_PATH'], '/usr/bin/chromium', '/usr/bin/chromium-browser'].find(
	(path): path is string => path !== undefined && existsSync(path)
);

/** Headless Debian Chromium, kept from calling home. */
export function launchBrowser(): Promise<Browser> {
	if (!executablePath) throw new Error('The browser tests need Chromium: "sudo apt-get install chromium".');
	return chromium.launch({
		executablePath,
		args: [
			'--no-sandbox',
			'--disable-gpu',
			'--disable-quic',
			'--disable-background-networking',
			'--disable-component-update',
			'--disable-sync',
			'--no-first-run'
		]
	});
}

export const DESKTOP = { width: 1440, height: 900 };
export const PHONE = { width: 390, height: 844 };

export interface Person {
	context: BrowserContext;
	page: Page;
	/** What the browser complained about: script errors, refused resources, policy violations. */
	complaints: string[];
}

/** A browser of one person: own cookies, own window. */
export async function openPerson(browser: Browser, viewport = DESKTOP): Promise<Person> {
	const context = await browser.newContext({
		viewport,
		baseURL: inject('origin'),
		acceptDownloads: true,
		timezoneId: 'Europe/Berlin',
		locale: 'en-GB',
		reducedMotion: 'reduce'
	});
	const page = await context.newPage();
	page.setDefaultTimeout(20_000);
	const complaints: string[] = [];
	page.on('pageerror', (error) => complaints.push(`${page.url()}: ${error.message}`));
	page.on('console', (message) => {
		// A refused form answers 4xx, which Chromium reports as an error of the console; the tests check those themselves.
		if (message.type() === 'error' && !message.text().startsWith('Failed to load resource'))
			complaints.push(`${page.url()}: ${message.text()}`);
	});
	return { context, page, complaints };
}

export async function signIn(page: Page, email: string, password = PASSWORD): Promise<void> {
	await page.goto('/sign-in');
	await page.getByLabel('E-mail').fill(email);
	await page.getByLabel('Password', { exact: true }).fill(password);
	await page.getByRole('button', { name: 'Sign in', exact: true }).click();
	await page.waitForURL((url) => !url.pathname.startsWith('/sign-in'));
}

/** axe finds nothing on the page as it stands. */
export async function expectAccessible(page: Page): Promise<void> {
	const { violations } = await new AxeBuilder({ page }).analyze();
	const found = violations.map(
		(v) => `${v.id}: ${v.help}\n    ${v.nodes.map((n) => n.target.join(' ')).join('\n    ')}`
	);
	expect(found, `axe on ${page.url()}`).toEqual([]);
}

/** Nothing scrolls sideways but a chart or a table in its own frame. */
export async function expectNoSidewaysScroll(page: Page): Promise<void> {
	const overflow = await page.evaluate(
		() => document.documentElement.scrollWidth - document.documentElement.clientWidth
	);
	expect(overflow, `sideways overflow in px on ${page.url()}`).toBeLessThanOrEqual(0);
}
