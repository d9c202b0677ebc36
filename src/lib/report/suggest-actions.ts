import type { Assessment, VerdictRow } from '../assessment/assessment';
import { REMEDY_CAUTION } from './cautions';

/** A recommended action offered from what an assessment shows. Every one is preliminary. */
export interface SuggestedAction {
	key: string;
	title: string;
	detail: string;
	priority: 'urgent' | 'normal' | 'advice';
	side: 'client' | 'practice';
	/** Why it is offered. */
	why: string;
}

const SIX_PULSE = [5, 7, 11, 13, 17, 19, 23, 25];
const QUALIFIED = 'Connecting, switching and measuring at the switchboard is for qualified persons only.';

function isOver(row: VerdictRow): boolean {
	return row.verdict === 'exceeds' || row.verdict === 'exceeds-inside-uncertainty';
}

function ordersOver(assessment: Assessment, quantity: VerdictRow['quantity']): Set<number> {
	return new Set(
		assessment.rows.flatMap((row) =>
			row.quantity === quantity && isOver(row) && row.item.kind === 'order' ? [row.item.order] : []
		)
	);
}

function listOrders(orders: readonly number[]): string {
	return orders.length === 1
		? `order ${orders[0]}`
		: `orders ${orders.slice(0, -1).join(', ')} and ${orders.at(-1)}`;
}

/** Greatest value of an order over phases and rules, percent of the table's basis; null when none was measured. */
function level(assessment: Assessment, quantity: VerdictRow['quantity'], order: number): number | null {
	return assessment.rows.reduce<number | null>(
		(most, row) =>
			row.quantity === quantity &&
			row.item.kind === 'order' &&
			row.item.order === order &&
			row.value_pct !== null
				? Math.max(most ?? 0, row.value_pct)
				: most,
		null
	);
}

function sixPulse(assessment: Assessment): SuggestedAction[] {
	const over = SIX_PULSE.filter((order) => ordersOver(assessment, 'current').has(order));
	const totalOver = assessment.rows.some(
		(row) => row.quantity === 'current' && row.item.kind === 'total' && isOver(row)
	);
	const typical = (level(assessment, 'current', 5) ?? 0) > 2 * (level(assessment, 'current', 3) ?? 0);
	if (over.length === 0 && !(totalOver && typical)) return [];
	return [
		{
			key: 'six-pulse-reactors',
			title: 'Ask the drive supplier about line reactors or dc-link chokes',
			detail: `The spectrum is that of six-pulse rectifiers. Line reactors of about 3 to 5 % at each drive, where none are fitted, lower the low orders most cheaply; check the voltage drop with the supplier. ${REMEDY_CAUTION}`,
			priority: 'urgent',
			side: 'client',
			why:
				over.length > 0
					? `Current exceeds its limit at ${listOrders(over)}.`
					: 'Total demand distortion exceeds its limit, with the 5th as its greatest part.'
		},
		{
			key: 'six-pulse-study',
			title: 'Study multi-pulse front ends and a tuned or active filter',
			detail: `Where reactors do not suffice: phase-shifted supply of groups of drives, front ends of 12 or 18 pulses or active ones, or a filter at the main switchboard. A tuned filter must be studied against the impedance of the supply, so that it does not resonate at another order. ${REMEDY_CAUTION}`,
			priority: 'normal',
			side: 'practice',
			why: 'The cure has to be sized on the load and the supply together.'
		}
	];
}

function triplen(assessment: Assessment): SuggestedAction[] {
	const third = level(assessment, 'current', 3) ?? 0;
	const over = [3, 9, 15, 21].filter((order) => ordersOver(assessment, 'current').has(order));
	const fifth = level(assessment, 'current', 5) ?? 0;
	if (over.length === 0 && !(third > 10 && third > fifth)) return [];
	return [
		{
			key: 'triplen-neutral',
			title: 'Check the sizing of the neutral and of the transformer for triplen currents',
			detail: `Triplen harmonics of the three phases add up in the neutral: its current can exceed that of a phase. Check the neutral's cross-section and its protection, and whether the transformer is rated for the harmonic load (K factor). ${QUALIFIED} ${REMEDY_CAUTION}`,
			priority: over.length > 0 ? 'urgent' : 'normal',
			side: 'client',
			why:
				over.length > 0
					? `Current exceeds its limit at ${listOrders(over)}.`
					: 'The 3rd harmonic of current is the greatest of its orders.'
		}
	];
}

/** An order that stands far above its neighbours of six-pulse kind hints at a resonance. */
function resonance(assessment: Assessment): SuggestedAction[] {
	const found = (['voltage', 'current'] as const).flatMap((quantity) =>
		[7, 11, 13, 17, 19, 23, 25].filter((order, i, orders) => {
			const here = level(assessment, quantity, order);
			const before = level(assessment, quantity, orders[i - 1] ?? 5);
			return here !== null && before !== null && here > 1 && here > 1.5 * before;
		})
	);
	const orders = [...new Set(found)].sort((a, b) => a - b);
	if (orders.length === 0) return [];
	return [
		{
			key: 'resonance-capacitors',
			title: 'Check the capacitor banks near the point for resonance',
			detail: `Note the size and steps of every capacitor bank, whether it is detuned, and measure with the bank in and out of service. Do not add or change capacitors before the study. Capacitors stay charged after isolation: wait, prove dead, and short them. ${QUALIFIED} ${REMEDY_CAUTION}`,
			priority: 'normal',
			side: 'client',
			why: `The level at ${listOrders(orders)} stands well above that of the order before it, as near a resonance.`
		}
	];
}

function remeasure(assessment: Assessment): SuggestedAction[] {
	const list: SuggestedAction[] = [];
	if (assessment.verdict === 'not-assessed' || assessment.missing.length > 0)
		list.push({
			key: 'complete-data',
			title: 'Complete what is missing and assess again',
			detail: `${assessment.missing.join(' ')} ${QUALIFIED}`.trim(),
			priority: 'normal',
			side: 'practice',
			why: 'Part of the limits could not be judged.'
		});
	if (assessment.evidence !== 'weekly')
		list.push({
			key: 'measure-week',
			title: 'Measure again for a whole week',
			detail: `The rule asks for a week of 10-minute values (and, where it says so, for days of 3-second values). Leave a recorder of class I at the point for seven days of ordinary operation. ${QUALIFIED} Never open the secondary of an energised current transformer.`,
			priority: assessment.verdict === 'compliant' ? 'advice' : 'normal',
			side: 'practice',
			why: `The evidence is ${assessment.evidence}.`
		});
	if (assessment.rows.some((row) => row.verdict.includes('inside-uncertainty')))
		list.push({
			key: 'lower-uncertainty',
			title: 'Measure again with a smaller uncertainty',
			detail: `A value lies within the uncertainty of its limit. An instrument of class I with sensors of a better class can decide it. ${QUALIFIED}`,
			priority: 'normal',
			side: 'practice',
			why: 'At least one comparison is inconclusive.'
		});
	return list;
}

function voltage(assessment: Assessment): SuggestedAction[] {
	const over = assessment.rows.some((row) => row.quantity === 'voltage' && isOver(row));
	if (!over) return [];
	return [
		{
			key: 'voltage-operator',
			title: 'Take the voltage distortion up with the network operator',
			detail:
				'Ask for the operator’s own readings and for the background distortion without this installation. The operator answers for voltage, the user for current (common practice under both families of standards).',
			priority: 'normal',
			side: 'client',
			why: 'Voltage distortion exceeds its limit.'
		}
	];
}

/** What an assessment suggests doing, most urgent first. */
export function suggestActions(assessment: Assessment): SuggestedAction[] {
	const rank = { urgent: 0, normal: 1, advice: 2 };
	return [sixPulse, triplen, voltage, resonance, remeasure]
		.flatMap((rule) => rule(assessment))
		.sort((a, b) => rank[a.priority] - rank[b.priority]);
}
