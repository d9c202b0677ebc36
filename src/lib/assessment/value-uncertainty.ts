import type { UncertaintyStatement, VerdictRow } from './assessment';

/**
 * Expanded uncertainty of a level, percentage points of its basis.
 * A total takes the greatest relative uncertainty of its orders: an upper bound, whatever the correlation.
 * The instrument's floor (an absolute share of its nominal value) holds for small readings; for a level in percent
 * of the fundamental it is taken as percent of the fundamental, which differs by the supply tolerance only.
 * value_pct     level in percent of its basis
 * fullScale_A   what 100 % of a current level is, A; null for voltage
 */
export function valueUncertainty_pct(
	statement: UncertaintyStatement,
	quantity: 'voltage' | 'current',
	item: VerdictRow['item'],
	orders: { from: number; to: number },
	value_pct: number,
	fullScale_A: number | null
): number {
	const relative = quantity === 'voltage' ? statement.voltage_pctOfReading : statement.current_pctOfReading;
	let share_pct = 0;
	if (item.kind === 'order') share_pct = relative(item.order);
	else {
		for (let order = orders.from; order <= orders.to; order++)
			share_pct = Math.max(share_pct, relative(order));
	}
	const ofReading = (value_pct * share_pct) / 100;
	if (quantity === 'voltage') return Math.max(ofReading, statement.voltageFloor_pctOfNominal ?? 0);
	if (statement.currentFloor_A === undefined || fullScale_A === null) return ofReading;
	return Math.max(ofReading, (100 * statement.currentFloor_A) / fullScale_A);
}
