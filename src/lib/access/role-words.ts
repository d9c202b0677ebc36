import type { Role } from './access';

const WORD: Record<Role, string> = {
	owner: 'Owner',
	engineer: 'Engineer',
	checker: 'Checker',
	client: 'Client'
};

export function roleWord(role: Role): string {
	return WORD[role];
}

/** What a role may do, for the person who gives it. */
export const ROLE_PURPOSE: Record<Role, string> = {
	owner: 'Runs the practice: people, letterhead, mail, history, and all that a checker may.',
	engineer: 'Measures: clients, sites, surveys, captures, assessments and draft reports.',
	checker: 'All that an engineer may; checks, issues and withdraws reports.',
	client: 'Reads, acknowledges and asks about the issued reports of one organisation.'
};
