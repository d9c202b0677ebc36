import { standing, type StandingCheck } from './overrule';

/** How a capture's checks stand, in numbers. */
export interface CheckCounts {
	/** Findings of each weight that nobody has overruled. */
	blocks: number;
	warns: number;
	overruled: number;
	passes: number;
}

export function countChecks(checks: readonly StandingCheck[]): CheckCounts {
	return {
		blocks: standing(checks, 'blocks').length,
		warns: standing(checks, 'warns').length,
		overruled: checks.filter(({ overrule }) => overrule !== null).length,
		passes: checks.filter(({ check }) => check.outcome === 'passes').length
	};
}

/** "1 blocks, 2 warn, 1 overruled, 12 in order"; what is none is left out. */
export function countWords({ blocks, warns, overruled, passes }: CheckCounts): string {
	const parts = [
		blocks > 0 ? `${blocks} ${blocks === 1 ? 'blocks' : 'block'} the verdict` : '',
		warns > 0 ? `${warns} ${warns === 1 ? 'warns' : 'warn'}` : '',
		overruled > 0 ? `${overruled} overruled` : '',
		`${passes} in order`
	];
	return parts.filter((part) => part !== '').join(', ');
}
