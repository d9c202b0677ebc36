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
			requestId: string;
			theme: 'light' | 'dark' | 'auto';
		}
		interface PageState {
			dialog?: string;
		}
	}
}

export {};
