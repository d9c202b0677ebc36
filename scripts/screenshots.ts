/**
 * npm run screenshots [-- FOLDER]
 *
 * Starts the built product on a freshly told demo story, opens every page as the person it is meant for, and writes
 * a picture of each in three forms (desktop, dark, 390 px) to test-results/screenshots, so that a person can look at
 * all of them at once. With --readme it also refreshes the pictures that the README shows.
 */
import { spawn } from 'node:child_process';
import { copyFileSync, existsSync, mkdirSync, mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Browser, Page } from 'playwright-core';
import { CLIENTS, DEMO_PASSWORD, STAFF } from '../seeds/demo/people';
import { launchChromium, signInAs, waitUntilUp } from './browser-person';

const PORT = 3920;
const ORIGIN = `http://localhost:${PORT}`;
const folder =
	process.argv.slice(2).find((argument) => !argument.startsWith('--')) ?? 'test-results/screenshots';
const forReadme = process.argv.includes('--readme');

const FORMS = [
	{ name: 'desktop', viewport: { width: 1440, height: 900 }, colorScheme: 'light' },
	{ name: 'dark', viewport: { width: 1440, height: 900 }, colorScheme: 'dark' },
	{ name: 'phone', viewport: { width: 390, height: 844 }, colorScheme: 'light' }
] as const;

/** Pages by a name for the file; a function finds an address by clicking as a person would. */
type Way = string | ((page: Page) => Promise<void>);

async function openSurvey(page: Page, title: string, stage: string): Promise<void> {
	await page.goto('/surveys');
	await page.getByRole('link', { name: title }).first().click();
	await page.waitForURL(/\/surveys\/[0-9a-f-]{36}/);
	const id = /\/surveys\/([0-9a-f-]{36})/.exec(page.url())?.[1];
	await page.goto(`/surveys/${id}/${stage}`);
}
const survey =
	(title: string, stage: string): Way =>
	(page) =>
		openSurvey(page, title, stage);

async function follow(page: Page, from: string, link: RegExp | string): Promise<void> {
	await page.goto(from);
	await page.getByRole('main').getByRole('link', { name: link }).first().click();
	await page.waitForLoadState('networkidle');
}
const followed =
	(from: string, ...links: (RegExp | string)[]): Way =>
	async (page) => {
		await follow(page, from, links[0]!);
		for (const link of links.slice(1)) {
			await page.getByRole('main').getByRole('link', { name: link }).first().click();
			await page.waitForLoadState('networkidle');
		}
	};

const HARROW = 'Harmonic survey at Harrow Dock 4';
const PEOPLE: { who: string; email: string | null; pages: Record<string, Way> }[] = [
	{
		who: 'anyone',
		email: null,
		pages: {
			'sign-in': '/sign-in',
			'sign-in-link': '/sign-in/link',
			forgotten: '/forgotten',
			mailbox: '/mailbox',
			'not-found': '/no-such-page'
		}
	},
	{
		who: 'engineer',
		email: STAFF.adeyemi.email,
		pages: {
			desk: '/desk',
			surveys: '/surveys',
			'survey-new': '/surveys/new',
			'survey-point': survey(HARROW, 'point'),
			'survey-captures': survey(HARROW, 'captures'),
			'survey-readings': survey(HARROW, 'readings'),
			'survey-verdict': survey(HARROW, 'verdict'),
			'survey-remedies': survey(HARROW, 'remedies'),
			'survey-report': survey(HARROW, 'report'),
			'verdict-inconclusive': survey('Supply quality at LV board 1', 'verdict'),
			'verdict-advisory': survey('Compressor panel 2, drives alone', 'verdict'),
			'verdict-compliant': survey('Ostler Lane, after the drive rebuild', 'verdict'),
			'readings-resonance': survey('Capacitor bank and the 11th at the intake', 'readings'),
			'report-draft': survey('Capacitor bank and the 11th at the intake', 'report'),
			'captures-empty': survey('Harrow Dock 4, repeat after line reactors', 'captures'),
			clients: '/clients',
			'client-new': '/clients/new',
			client: followed('/clients', 'Bellwether Cold Store'),
			site: followed('/clients', 'Bellwether Cold Store', 'Harrow Dock 4'),
			point: followed('/clients', 'Kestrel Row Data Hall', 'Kestrel Row', /LV board 1/),
			instruments: '/instruments',
			instrument: followed('/instruments', 'Recorder 2'),
			'limit-library': '/limit-library',
			'limit-set': followed('/limit-library', /519.*2022|IEEE Std 519/),
			search: '/search?q=harrow',
			queries: '/queries',
			profile: '/profile'
		}
	},
	{
		who: 'checker',
		email: STAFF.tarn.email,
		pages: { desk: '/desk', 'report-in-check': survey('Supply quality at LV board 1', 'report') }
	},
	{
		who: 'owner',
		email: STAFF.holloway.email,
		pages: {
			people: '/practice/people',
			letterhead: '/practice/letterhead',
			outbox: '/practice/outbox',
			history: '/practice/history'
		}
	},
	{
		who: 'client',
		email: CLIENTS.bellwether.person.email,
		pages: {
			reports: '/portal/reports',
			report: followed('/portal/reports', /Harrow|Harmonic/),
			sites: '/portal/sites',
			site: followed('/portal/sites', 'Harrow Dock 4'),
			actions: '/portal/actions'
		}
	}
];

async function photograph(browser: Browser): Promise<number> {
	let faults = 0;
	for (const form of FORMS)
		for (const { who, email, pages } of PEOPLE) {
			const context = await browser.newContext({
				baseURL: ORIGIN,
				viewport: form.viewport,
				colorScheme: form.colorScheme,
				reducedMotion: 'reduce',
				timezoneId: 'Europe/London'
			});
			const page = await context.newPage();
			page.on('pageerror', (error) => {
				faults++;
				console.error(`  script error on ${page.url()}: ${error.message}`);
			});
			if (email) await signInAs(page, email, DEMO_PASSWORD);
			for (const [name, way] of Object.entries(pages)) {
				try {
					if (typeof way === 'string') await page.goto(way);
					else await way(page);
					await page.waitForLoadState('networkidle');
					await page.waitForTimeout(400);
					await page.screenshot({ path: join(folder, `${who}-${name}-${form.name}.png`), fullPage: true });
				} catch (cause) {
					faults++;
					console.error(
						`  ${who} ${name} (${form.name}): ${cause instanceof Error ? cause.message.split('\n')[0] : cause}`
					);
				}
			}
			await context.close();
		}
	return faults;
}

const README_PICTURES = {
	'engineer-survey-verdict-desktop.png': 'verdict.png',
	'engineer-survey-readings-desktop.png': 'readings.png',
	'client-report-desktop.png': 'portal.png',
	'engineer-desk-dark.png': 'desk-dark.png'
};

if (!existsSync('build/index.js')) {
	console.error('There is no build yet. Run "npm run build" first.');
	process.exit(2);
}
rmSync(folder, { recursive: true, force: true });
mkdirSync(folder, { recursive: true });
const dataDir = mkdtempSync(join(tmpdir(), 'sinewright-shots-'));
const product = spawn(process.execPath, ['--import', 'tsx', 'scripts/demo.ts'], {
	env: { ...process.env, DATA_DIR: dataDir, PORT: String(PORT), LOG_LEVEL: 'error' },
	stdio: ['ignore', 'ignore', 'inherit']
});
let faults: number;
try {
	await waitUntilUp(`${ORIGIN}/healthz`);
	const browser = await launchChromium();
	faults = await photograph(browser);
	await browser.close();
	if (forReadme) {
		mkdirSync('docs/screenshots', { recursive: true });
		for (const [from, to] of Object.entries(README_PICTURES))
			copyFileSync(join(folder, from), join('docs/screenshots', to));
	}
	console.log(
		`Pictures are in ${folder}${faults ? `; ${faults} pages could not be taken or had script errors` : ''}.`
	);
} finally {
	product.kill('SIGTERM');
	await new Promise((resolve) => product.once('exit', resolve));
	rmSync(dataDir, { recursive: true, force: true });
}
process.exit(faults === 0 ? 0 : 1);
