import type { Actor } from '$lib/access/access';

declare global {
	namespace App {
		interface Error {
			message: string;
			/** The same reference stands in the log. */
			reference?: string;
		}
		interface Locals {
			/** Who acts in this request, in which practice and role; null when nobody is signed in. */
			actor: Actor | null;
			/** Name of the organisation that a client acts for. */
			clientName: string | null;
			/** Hash of the session's token: names the session, opens nothing. */
			sessionId: string | null;
			requestId: string;
			theme: 'light' | 'dark' | 'auto';
		}
		interface PageState {
			dialog?: string;
		}
	}
}

export {};
