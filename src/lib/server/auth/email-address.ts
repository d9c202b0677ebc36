/** The form in which an address is stored and compared. */
export function normaliseEmail(email: string): string {
	return email.normalize('NFKC').trim().toLowerCase();
}
