import { writeFileSync } from 'node:fs';
import type { Container, Overrides } from '../../src/lib/server/container';
import { storyClock } from './clock';
import { registerDemo } from './register';
import { reportDemo } from './reports';
import { measureDemo } from './surveys';

/**
 * Tells the demo's story through the product's own use cases and real files, so that everything on screen was
 * computed and every deed has its entry in the history.
 * marker  file written when the story is complete
 */
export async function seedDemo(
	build: (overrides: Overrides) => Container,
	marker: string,
	say: (line: string) => void
): Promise<void> {
	const today = new Date();
	const story = storyClock(today);
	// Mail of the story stays in the local mailbox.
	const container = build({ clock: story.clock, mailTransport: async () => undefined });
	try {
		const register = await registerDemo(container, story, today);
		say('  practice, people, clients, sites and points');
		const surveys = await measureDemo(container, story, register, today);
		say('  surveys and captures, analysed and assessed');
		await reportDemo(container, story, register, surveys, today);
		say('  reports, acknowledgements, questions and actions');
		await container.mail.deliverDue();
	} finally {
		await container.db.destroy();
	}
	writeFileSync(marker, today.toISOString());
}
