/**
 * The whole job as its people do it: an engineer describes a point and uploads a capture, the worker analyses it, the
 * verdict appears with its reasons, a checker issues a numbered PDF, the facility manager gets the mail, reads,
 * downloads and acknowledges; and another practice sees nothing of it.
 */
import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
	DESKTOP,
	expectAccessible,
	expectNoSidewaysScroll,
	launchBrowser,
	openPerson,
	PHONE,
	signIn,
	type Person
} from './support/browser';
import { ownCapture, realCapture, realCaptureIsHere } from './support/captures';
import { linkFromMail } from './support/mailbox';
import { ALDER, BIRCH, PASSWORD } from './support/people';

let browser: Browser;
beforeAll(async () => {
	browser = await launchBrowser();
});
afterAll(() => browser?.close());

const STORIES = [
	{ name: 'at a desktop', key: 'desk', viewport: DESKTOP, capture: ownCapture, here: true },
	{ name: 'at 390 px', key: 'phone', viewport: PHONE, capture: ownCapture, here: true },
	{
		name: realCaptureIsHere
			? 'on a recording of a real generator'
			: 'on a recording of a real generator (skipped: no ../shared/samples beside this checkout)',
		key: 'real',
		viewport: DESKTOP,
		capture: realCapture,
		here: realCaptureIsHere
	}
];

describe.each(STORIES)('the whole job, $name', ({ key, viewport, capture, here }) => {
	const clientName = `Millbrook Paper ${key}`;
	const siteName = `Weir Street ${key}`;
	const clientEmail = `sam.${key}@millbrook.example`;
	let owner: Person;
	let engineer: Person;
	let checker: Person;
	let client: Person;
	let surveyPath = '';
	let portalPath = '';
	let pdfSha256 = '';

	beforeAll(async () => {
		if (!here) return;
		[owner, engineer, checker, client] = await Promise.all([
			openPerson(browser, viewport),
			openPerson(browser, viewport),
			openPerson(browser, viewport),
			openPerson(browser, viewport)
		]);
	});
	afterAll(async () => {
		for (const person of [owner, engineer, checker, client]) await person?.context.close();
	});

	async function settled(page: Page): Promise<void> {
		await page.waitForLoadState('networkidle');
		await expectAccessible(page);
		await expectNoSidewaysScroll(page);
	}

	it.runIf(here)('the engineer registers client, site and point as they are known', async () => {
		const { page } = engineer;
		await signIn(page, ALDER.engineer.email);
		await settled(page);
		await page.goto('/clients/new');
		await page.getByLabel('Name', { exact: false }).first().fill(clientName);
		await settled(page);
		await page.getByRole('button', { name: 'Register client' }).click();
		await page.waitForURL(/\/clients\/[0-9a-f-]{36}$/);
		await settled(page);
		const clientPath = new URL(page.url()).pathname;

		await page.goto(`${clientPath}/sites/new`);
		await page.locator('input[name="name"]').fill(siteName);
		await page.locator('select[name="timeZone"]').selectOption('Europe/Berlin');
		await settled(page);
		await page.getByRole('button', { name: 'Add site' }).click();
		await page.waitForURL(/\/sites\/[0-9a-f-]{36}$/);
		await settled(page);
		const sitePath = new URL(page.url()).pathname;

		await page.goto(`${sitePath}/points/new`);
		await page.locator('input[name="name"]').fill('6 kV intake');
		await page.locator('input[name="kind"][value="pcc"]').check();
		await page
			.locator('[name="system"]')
			.first()
			.evaluate((control) => control.tagName);
		await choose(page, 'system', 'four-wire');
		await page.locator('input[name="nominalVoltage"]').fill('six thousand');
		await choose(page, 'nominalFrequency', '50');
		await page.locator('input[name="demandMethod"][value="entered"]').check();
		await page.locator('input[name="demandCurrent"]').fill('1500 A');
		await page.locator('input[name="shortCircuitMethod"][value="current"]').check();
		await page.locator('input[name="shortCircuitCurrent"]').fill('31.5 kA');
		await page
			.locator('select[name="limitSetId"]')
			.selectOption(await optionLike(page, 'limitSetId', /519.*2022/));
		await page.getByRole('button', { name: 'Add point' }).click();
		// A voltage that is none is refused beside its field, and nothing typed is lost.
		await page
			.getByText(/six thousand/)
			.first()
			.waitFor();
		expect(await page.locator('input[name="shortCircuitCurrent"]').inputValue()).toBe('31.5 kA');
		await settled(page);
		await page.locator('input[name="nominalVoltage"]').fill('6 kV');
		await page.getByRole('button', { name: 'Add point' }).click();
		await page.waitForURL(/\/points\/[0-9a-f-]{36}$/);
		// 31.5 kA / 1500 A = 21.0, shown with its working.
		expect(await page.getByRole('main').innerText()).toMatch(/21\.0/);
		await settled(page);
	});

	it.runIf(here)('the owner invites the facility manager by mail, who accepts', async () => {
		await signIn(owner.page, ALDER.owner.email);
		await owner.page.goto('/practice/people');
		const form = owner.page
			.locator('form')
			.filter({ has: owner.page.getByRole('button', { name: 'Send the invitation' }) });
		await form.locator('input[name="email"]').fill(clientEmail);
		await form.locator('input[name="name"]').fill(ALDER.clientPerson.name);
		await choose(owner.page, 'role', 'client', form);
		await form.locator('select[name="clientId"]').selectOption({ label: clientName });
		await settled(owner.page);
		await form.getByRole('button', { name: 'Send the invitation' }).click();
		await owner.page.getByText(clientEmail).first().waitFor();

		const link = await linkFromMail(client.page, clientEmail, /./);
		expect(new URL(link).pathname).toMatch(/^\/invitation\//);
		await client.page.goto(link);
		await settled(client.page);
		// Opening the link again, as a mail scanner does, burns nothing.
		await client.page.goto(link);
		await client.page.getByLabel('Password', { exact: false }).first().fill(PASSWORD);
		await client.page.getByRole('button', { name: 'Accept and sign in' }).click();
		await client.page.waitForURL(/\/portal\/reports/);
		await settled(client.page);
	});

	it.runIf(here)('the capture is uploaded, recognised, mapped and analysed', async () => {
		const { page } = engineer;
		await page.goto('/surveys/new');
		await page
			.locator('select[name="pointId"]')
			.selectOption(await optionLike(page, 'pointId', /6 kV intake/, siteName));
		await page.locator('input[name="title"]').fill(`Harmonics at ${siteName}`);
		await settled(page);
		await page.getByRole('button', { name: 'Start survey' }).click();
		await page.waitForURL(/\/surveys\/[0-9a-f-]{36}/);
		surveyPath = /\/surveys\/[0-9a-f-]{36}/.exec(page.url())![0];

		await page.goto(`${surveyPath}/captures`);
		await settled(page);
		await page.locator('input[type="file"]').setInputFiles(capture());
		// The list alone: a note beside it may name the same content in another survey.
		const list = page.getByRole('region', { name: 'Captures of this survey' });
		const row = list.getByRole('link', { name: /millbrook|gen50/ });
		await row.first().waitFor({ timeout: 60_000 });
		await settled(page);
		await row.first().click();
		await page.getByRole('button', { name: 'Confirm and analyse' }).waitFor();
		await settled(page);
		await page.getByRole('button', { name: 'Confirm and analyse' }).click();
		await page.getByRole('link', { name: 'See the readings' }).waitFor({ timeout: 90_000 });
		await settled(page);
		await page.getByRole('link', { name: 'See the readings' }).click();
		await page.waitForURL(/\/readings/);
		await page.locator('canvas, svg[aria-label], [role="img"]').first().waitFor();
		await settled(page);
		await page.getByRole('link', { name: 'Current', exact: true }).click();
		await settled(page);
	});

	it.runIf(here)('the verdict appears with value, limit, clause and evidence', async () => {
		const { page } = engineer;
		await page.goto(`${surveyPath}/verdict`);
		const main = page.getByRole('main');
		await main.getByText('evidence: snapshot').first().waitFor({ timeout: 60_000 });
		const text = await main.innerText();
		expect(text).toMatch(/IEEE Std 519/);
		// I_sc/I_L = 21 lies in the class 20 < 50 (IEEE Std 519-2022, Table 2).
		expect(text).toMatch(/20 < 50/);
		if (key === 'real') {
			// expected.json beside the recording: THD below 1 % on every channel, the 5th below 0.8 % of some 1,400 A.
			expect(text).toMatch(/Every level keeps its limit/);
		} else {
			// 14 % of 1,400 A is 13.07 % of the demand current of 1,500 A; 7 % is allowed at the 5th.
			expect(text).toMatch(/13\.07/);
			expect(text).toMatch(/7\.00/);
			expect(text).toMatch(/exceeds/);
		}
		await settled(page);
		await page.goto(`${surveyPath}/verdict?show=all`);
		await settled(page);
	});

	it.runIf(here)('an action is recommended and the report drafted and sent for check', async () => {
		const { page } = engineer;
		await page.goto(`${surveyPath}/remedies`);
		await page.getByLabel('What is to be done').fill('Ask the drive supplier for line reactors');
		await page.locator('input[name="responsible"]').fill('Facilities');
		await page.locator('input[name="dueOn"]').fill('2027-04-30');
		await settled(page);
		await page.getByRole('button', { name: 'Add the action' }).click();
		await page
			.getByRole('cell', { name: /line reactors/ })
			.or(page.getByRole('rowheader', { name: /line reactors/ }))
			.first()
			.waitFor();
		await settled(page);

		await page.goto(`${surveyPath}/report`);
		await settled(page);
		await page.getByRole('button', { name: 'Make the draft' }).click();
		await page
			.getByLabel('Summary for the client')
			.fill('Measured for the browser test, and explained in one sentence.');
		await settled(page);
		await page.getByRole('button', { name: 'Save the draft' }).click();
		await page.getByText(/saved/i).first().waitFor();
		// The author, being no checker, is offered no way to issue it.
		expect(await page.getByRole('button', { name: 'Issue the report' }).count()).toBe(0);
		await page.getByRole('button', { name: 'Send for check' }).click();
		await page.getByRole('dialog').getByRole('button', { name: 'Send for check' }).click();
		await page.getByText('in check').first().waitFor();
		await settled(page);
	});

	it.runIf(here)('another engineer checks it and issues a numbered PDF', async () => {
		const { page } = checker;
		await signIn(page, ALDER.checker.email);
		await page.goto('/desk');
		await page
			.getByRole('link', { name: /Check: / })
			.first()
			.waitFor();
		await settled(page);
		await page.goto(`${surveyPath}/report`);
		await settled(page);
		await page.getByRole('button', { name: 'Issue the report' }).click();
		const dialog = page.getByRole('dialog');
		expect(await dialog.innerText()).toContain(clientEmail);
		await dialog.getByRole('button', { name: 'Issue the report' }).click();
		await page
			.getByText(/AM-\d{4}-\d{4}/)
			.first()
			.waitFor({ timeout: 90_000 });
		await settled(page);
	});

	it.runIf(here)('the facility manager follows the mail, reads, downloads and acknowledges', async () => {
		const { page } = client;
		const link = await linkFromMail(page, clientEmail, /^.*Report AM-/s);
		portalPath = new URL(link).pathname;
		expect(portalPath).toMatch(/^\/portal\/reports\//);
		await page.goto(link);
		await page
			.getByText(/awaiting your/)
			.first()
			.waitFor();
		expect(await page.getByRole('main').innerText()).toContain('Ask the drive supplier for line reactors');
		await page.getByRole('button', { name: 'Read it here' }).waitFor();
		await settled(page);

		const [download] = await Promise.all([
			page.waitForEvent('download'),
			page.getByRole('link', { name: 'Download PDF' }).click()
		]);
		const bytes = readFileSync(await download.path());
		expect(bytes.subarray(0, 5).toString('latin1')).toBe('%PDF-');
		expect(download.suggestedFilename()).toMatch(/^AM-\d{4}-\d{4}.*\.pdf$/);
		pdfSha256 = createHash('sha256').update(bytes).digest('hex');

		await page.getByRole('button', { name: 'Read it here' }).click();
		await page.getByRole('dialog').getByText('Harmonic').first().waitFor();
		await page.getByRole('dialog').getByRole('button', { name: 'Close' }).click();

		// Without a name it is refused beside the field.
		await page.getByRole('button', { name: 'Acknowledge this report' }).click();
		await page.getByText(/Type your full name/).waitFor();
		await settled(page);
		await page.getByLabel('Your full name').fill('Samuel Portman');
		await page.getByLabel(/I have read report/).check();
		await page.getByRole('button', { name: 'Acknowledge this report' }).click();
		await page.getByText(/You have acknowledged/).waitFor();
		expect(
			await page.getByTitle(pdfSha256).count(),
			'the hash of the very file that was downloaded'
		).toBeGreaterThan(0);
		await settled(page);
	});

	it.runIf(here)('a question is asked and answered; the consultant sees the acknowledgement', async () => {
		await client.page
			.getByLabel('Ask your consultant about this report')
			.fill('Does it matter at part load?');
		await client.page.getByRole('button', { name: 'Send question' }).click();
		await client.page.getByText('Your question has been sent').waitFor();

		const { page } = engineer;
		await page.goto('/desk');
		await page
			.getByRole('link', { name: /Question on AM-/ })
			.first()
			.click();
		await page.getByText('Does it matter at part load?').waitFor();
		await settled(page);
		await page.getByLabel('Your answer').fill('Less so: the fifth falls with the load.');
		await page.getByRole('button', { name: 'Send' }).click();
		await page.getByText(/Your answer has been sent/).waitFor();
		await page.goto(`${surveyPath}/report`);
		await page.getByText('Samuel Portman').first().waitFor();
		await settled(page);

		await client.page.goto(portalPath);
		await client.page.getByText('Less so: the fifth falls with the load.').waitFor();
		for (const path of [
			'/portal/reports',
			'/portal/reports?show=waiting',
			'/portal/sites',
			'/portal/actions'
		]) {
			await client.page.goto(path);
			await settled(client.page);
		}
	});

	it.runIf(here)('another practice and its client see none of it', async () => {
		const stranger = await openPerson(browser, viewport);
		await signIn(stranger.page, BIRCH.owner.email);
		for (const path of [surveyPath, `${surveyPath}/verdict`, `${surveyPath}/report`]) {
			const answer = await stranger.page.goto(path);
			expect(answer?.status(), path).toBe(404);
			expect(await stranger.page.locator('body').innerText()).not.toContain(siteName);
		}
		await stranger.page.goto(`/search?q=${encodeURIComponent(siteName)}`);
		expect(await stranger.page.getByRole('main').getByRole('link', { name: siteName }).count()).toBe(0);
		await stranger.context.close();

		const otherClient = await openPerson(browser, viewport);
		await signIn(otherClient.page, BIRCH.clientPerson.email);
		expect((await otherClient.page.goto(portalPath))?.status()).toBe(404);
		const pdf = await otherClient.page.request.get(
			portalPath.replace('/portal/reports/', '/api/v1/reports/') + '/pdf'
		);
		expect(pdf.status()).toBe(404);
		await otherClient.context.close();
	});

	it.runIf(here)('no browser complained on the way', () => {
		expect([owner, engineer, checker, client].flatMap((person) => person.complaints)).toEqual([]);
	});
});

/** Chooses a value whichever control the form uses for it: radio buttons or a list. */
async function choose(
	page: Page,
	name: string,
	value: string,
	within: ReturnType<Page['locator']> = page.locator('body')
): Promise<void> {
	const radio = within.locator(`input[type="radio"][name="${name}"][value="${value}"]`);
	if ((await radio.count()) > 0) await radio.check();
	else await within.locator(`select[name="${name}"]`).selectOption(value);
}

/** The value of the option that fits, in the group that fits. */
async function optionLike(page: Page, name: string, label: RegExp, group = ''): Promise<string> {
	const options = await page.locator(`select[name="${name}"] option`).evaluateAll((all) =>
		all.map((option) => ({
			value: (option as HTMLOptionElement).value,
			text: option.textContent?.trim() ?? '',
			group: option.parentElement?.getAttribute('label') ?? ''
		}))
	);
	const found = options.find(
		(option) => label.test(option.text) && `${option.group} ${option.text}`.includes(group)
	);
	if (!found) throw new Error(`no option like ${label} in ${name}: ${JSON.stringify(options)}`);
	return found.value;
}
