export const REVISION_STATUSES = [
	'draft',
	'in-check',
	'returned',
	'issued',
	'superseded',
	'withdrawn'
] as const;
export type RevisionStatus = (typeof REVISION_STATUSES)[number];

/** Editable by its author: a fresh draft, or one that the checker sent back. */
export function isEditable(status: RevisionStatus): boolean {
	return status === 'draft' || status === 'returned';
}

/** Visible to the client: whatever was once issued, also when it no longer stands. */
export function isVisibleToClient(status: RevisionStatus): boolean {
	return status === 'issued' || status === 'superseded' || status === 'withdrawn';
}

/** A, B, …, Z, AA, AB, … */
export function nextRevision(revision: string): string {
	const letters = [...revision];
	for (let i = letters.length - 1; i >= 0; i--) {
		if (letters[i] !== 'Z') {
			letters[i] = String.fromCharCode(letters[i]!.charCodeAt(0) + 1);
			return letters.join('');
		}
		letters[i] = 'A';
	}
	return 'A' + letters.join('');
}
