import { createContext } from 'svelte';

/** What the person chose; `auto` follows the system. */
export type ThemeChoice = 'auto' | 'light' | 'dark';

const YEAR_S = 365 * 24 * 3600;

/**
 * The colour theme: chosen by the person (kept in the cookie `theme`, which the server puts into the page's
 * data-theme) or the system's. Charts watch `dark`, since they draw with plain colours.
 */
export class ThemeState {
	choice = $state<ThemeChoice>('auto');
	#systemDark = $state(false);

	readonly dark = $derived(this.choice === 'dark' || (this.choice === 'auto' && this.#systemDark));

	constructor(choice: ThemeChoice) {
		this.choice = choice;
	}

	/** Follows the system's setting; call in the browser, returns the way to stop. */
	watchSystem(): () => void {
		const query = window.matchMedia('(prefers-color-scheme: dark)');
		const update = () => (this.#systemDark = query.matches);
		update();
		query.addEventListener('change', update);
		return () => query.removeEventListener('change', update);
	}

	choose(choice: ThemeChoice): void {
		this.choice = choice;
		document.documentElement.dataset.theme = choice;
		document.cookie = `theme=${choice}; path=/; max-age=${YEAR_S}; samesite=lax`;
	}
}

const [getTheme, setTheme] = createContext<ThemeState>();

/** Called once, in the root layout, with the choice that the server read from the cookie. */
export function provideTheme(choice: ThemeChoice): ThemeState {
	const theme = setTheme(new ThemeState(choice));
	$effect(() => theme.watchSystem());
	return theme;
}

export function useTheme(): ThemeState {
	return getTheme();
}
