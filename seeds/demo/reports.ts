import type { Actor } from '../../src/lib/access/access';
import type { ActionFacts } from '../../src/lib/report/action-facts';
import type { Container } from '../../src/lib/server/container';
import type { StoryClock } from './clock';
import { workOff } from './intake';
import type { DemoRegister } from './register';
import type { DemoSurveys } from './surveys';

const DAY_MS = 86_400_000;

/** Reports in every state: issued and waiting, acknowledged, in check, returned, draft, replaced. */
export async function reportDemo(
	container: Container,
	story: StoryClock,
	register: DemoRegister,
	surveys: DemoSurveys,
	today: Date
): Promise<void> {
	const { reports, actions, portal, queries } = container.services;
	const { adeyemi, brandt, tarn, holloway } = register.staff;
	const due = (days: number): string => new Date(today.getTime() + days * DAY_MS).toISOString().slice(0, 10);
	const action = (facts: Partial<ActionFacts> & Pick<ActionFacts, 'title'>): ActionFacts => ({
		detail: '',
		priority: 'normal',
		side: 'client',
		responsible: '',
		dueOn: '',
		...facts
	});

	async function draft(author: Actor, surveyId: string, title: string, summary: string): Promise<string> {
		const revisionId = await reports.createDraft(author, surveyId);
		const row = await container
			.db('report_revisions')
			.where({ id: revisionId })
			.first('edition', 'findings_json');
		await reports.save(author, revisionId, {
			title,
			summary,
			findings: JSON.parse(row?.findings_json ?? '[]') as string[],
			edition: row?.edition ?? 1
		});
		return revisionId;
	}

	async function issue(author: Actor, checker: Actor, revisionId: string, days: number): Promise<void> {
		story.at(days + 1, 15);
		await reports.sendForCheck(author, revisionId);
		story.at(days, 10.5);
		await reports.issue(checker, revisionId);
		await workOff(container);
	}

	// Ostler Lane, last spring: over the limit, read and acknowledged.
	story.at(240, 10);
	await actions.add(
		adeyemi,
		surveys.ostlerBefore,
		action({
			title: 'Have the press drives rebuilt as twelve-pulse',
			responsible: 'Plant engineering',
			dueOn: due(-60)
		})
	);
	const before = await draft(
		adeyemi,
		surveys.ostlerBefore,
		'Harmonic compliance at Ostler Lane',
		'The presses draw more 5th harmonic than the tariff allows.\n\nThis was a capture of twelve seconds at full production: it shows the pattern and not the week. The rebuild of the drives that you plan is the right remedy; measure again after it.'
	);
	await issue(adeyemi, tarn, before, 236);
	story.at(230, 16);
	await portal.acknowledge(register.clientPeople.ostler, before, 'Walter Dunmore', 'demo');

	const [rebuild] = await portal.actions(register.clientPeople.ostler, { status: 'open' });
	story.at(26, 9);
	if (rebuild) {
		await portal.completeAction(
			register.clientPeople.ostler,
			rebuild.id,
			'Both presses run on twelve-pulse drives since last week.',
			'demo'
		);
		story.at(21, 9);
		await actions.confirm(adeyemi, surveys.ostlerBefore, rebuild.id);
	}

	// Harrow Dock: exceeds, issued, waits for its acknowledgement; a question has been asked.
	story.at(23, 10);
	await actions.add(
		adeyemi,
		surveys.harrowMain,
		action({
			title: 'Ask the drive supplier for 5 % line reactors',
			detail:
				'Preliminary: the reactors lower the 5th and the 7th at the compressors. The supplier must confirm the voltage drop at full load, and a licensed engineer the design, before anything is ordered.',
			responsible: 'Facilities',
			dueOn: due(30)
		})
	);
	await actions.add(
		adeyemi,
		surveys.harrowMain,
		action({
			title: 'Send the utility a copy of this report',
			responsible: 'Rosa Castellane',
			priority: 'urgent',
			dueOn: due(6)
		})
	);
	await actions.add(
		adeyemi,
		surveys.harrowMain,
		action({
			title: 'Measure again for a week after the change',
			side: 'practice',
			responsible: 'Mina Adeyemi',
			dueOn: due(75)
		})
	);
	const harrow = await draft(
		adeyemi,
		surveys.harrowMain,
		'Harmonic compliance at Harrow Dock 4',
		'The compressors draw more 5th harmonic current than the service agreement allows, on all three phases and on each day of the week.\n\nNothing needs to be switched off: the voltage you receive stays well inside its limits, and the excess harms neighbours slowly rather than suddenly. It does have to be cured, because the utility may ask for it at any time.'
	);
	await issue(adeyemi, tarn, harrow, 19);
	story.at(16, 11);
	await queries.ask(
		register.clientPeople.bellwether,
		harrow,
		'We add a fourth compressor in spring. Will the reactors you propose still be enough?',
		'demo'
	);

	// Ostler Lane after the rebuild: compliant, revised once, acknowledged.
	story.at(21, 13);
	const after = await draft(
		adeyemi,
		surveys.ostlerAfter,
		'Harmonic compliance at Ostler Lane after the rebuild',
		'After the rebuild the presses keep every limit of the tariff by a wide margin, as far as a short capture can show.\n\nTo turn this into a statement about a whole week, a recorder has to stay for seven days.'
	);
	await issue(adeyemi, holloway, after, 17);
	story.at(15, 9);
	const revised = await reports.startRevision(adeyemi, after, 'Billing demand corrected in the text');
	await issue(adeyemi, tarn, revised, 13);
	story.at(12, 8.5);
	await portal.acknowledge(register.clientPeople.ostler, revised, 'Walter Dunmore', 'demo');

	// Compressor panel: advisory and not assessed for want of a demand current; sent back by the checker.
	story.at(14, 10);
	const panel = await draft(
		brandt,
		surveys.harrowPanel,
		'Compressor panel 2, advisory comparison',
		'The drives of panel 2 were measured alone, for the design of the reactors.'
	);
	story.at(10, 15);
	await reports.sendForCheck(brandt, panel);
	story.at(9, 9);
	await reports.returnToAuthor(
		tarn,
		panel,
		'State the demand current of the panel, or say in the summary why current is not assessed.'
	);

	// Data hall: inconclusive at the 5th, waiting to be checked.
	story.at(3, 16);
	await actions.add(
		brandt,
		surveys.kestrel,
		action({
			title: 'Check the neutral of the main cable against the triplen current',
			responsible: 'Estates',
			dueOn: due(45)
		})
	);
	const kestrel = await draft(
		brandt,
		surveys.kestrel,
		'Supply quality at Kestrel Row',
		'The supply stayed within its limits for the whole week. At the 5th it came so close that the uncertainty of the measurement leaves the question open: neither a pass nor a fail can be claimed there.'
	);
	story.at(2, 10);
	await reports.sendForCheck(brandt, kestrel);

	// Hospital: a draft on the desk.
	story.at(1, 11);
	await draft(
		adeyemi,
		surveys.fennimore,
		'The 11th harmonic at Fennimore Park',
		'The capacitor bank at the intake raises the 11th harmonic of the voltage close to what the supply standard describes.'
	);
	await workOff(container);
}
