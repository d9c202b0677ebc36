import { unmappedConductors, type PointWindows } from '../../../harmonics/power/point-windows';
import type { Phase } from '../../../recording/phase';

/** "L2", "L1 and L2", "L1, L2 and L3". */
export function listed(names: readonly string[]): string {
	return names.length < 2 ? names.join('') : `${names.slice(0, -1).join(', ')} and ${names.at(-1)}`;
}

/** A sentence for each quantity that is not measured on every line conductor. */
export function unmappedNotes(
	point: PointWindows,
	label: (phase: Phase) => string,
	consequence: string
): string[] {
	const missing = unmappedConductors(point);
	return (['voltage', 'current'] as const).flatMap((quantity) => {
		const names = missing.filter((one) => one.quantity === quantity).map(({ phase }) => label(phase));
		return names.length === 0
			? []
			: [
					`No ${quantity} is mapped on ${listed(names)}: ${consequence} Map it under Captures if it was recorded.`
				];
	});
}
