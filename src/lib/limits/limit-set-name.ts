import { err, ok, type Result } from '../result';

/** What a limit set is called. */
export interface NamedLimitSet {
	key: string;
	standard: string;
	edition: string;
}

/** Letters and digits only; "Std" and "Standard" are often left out, so they count for nothing. */
function essence(name: string): string {
	return name
		.toLowerCase()
		.replace(/\b(std|standard)\b\.?/g, '')
		.replace(/[^\p{L}\p{N}]/gu, '');
}

/** "IEEE Std 519-2022", "EN 50160:2022", as a list for people shows them. */
function spoken({ standard, edition, key }: NamedLimitSet): string {
	return `${standard} ${edition} (${key})`;
}

/**
 * Finds a limit set by what a person calls it: its key, or standard and edition in any spelling ("IEEE 519-2022",
 * "ieee std 519 2022"); the beginning of one name is enough where it fits one set only.
 * returns  the set, or a sentence that lists what there is
 */
export function limitSetByName<Set extends NamedLimitSet>(
	name: string,
	sets: readonly Set[]
): Result<Set, string> {
	const wanted = essence(name);
	const namesOf = (set: Set) => [set.key, `${set.standard} ${set.edition}`].map(essence);
	const exact = sets.find((set) => namesOf(set).includes(wanted));
	if (exact) return ok(exact);
	const begun = wanted === '' ? [] : sets.filter((set) => namesOf(set).some((own) => own.startsWith(wanted)));
	if (begun.length === 1) return ok(begun[0]!);
	const list = (begun.length > 0 ? begun : sets).map(spoken).join('; ');
	return err(
		begun.length > 0
			? `The name “${name}” fits several limit sets; name the edition: ${list}.`
			: `There is no limit set “${name}”; choose one of these: ${list}.`
	);
}
