import {
	MOST_BEYOND_ROUNDING,
	STEADY_LIMITS,
	type SteadyCase,
	type SteadyErrors
} from '../../src/lib/accuracy/steady-tones';
import type { MovingCase, MovingErrors } from '../../src/lib/accuracy/moving-signals';
import { STATE_LIMITS, type StateErrors, type TestingState } from '../../src/lib/accuracy/testing-states';
import type { StepCase, StepErrors } from '../../src/lib/accuracy/voltage-step';

type Row = readonly (string | number)[];

/** One experiment with what came of it. */
export type Measured<C, E> = readonly (readonly [C, E])[];

function table(head: Row, rows: readonly Row[]): string {
	const line = (cells: Row) => `| ${cells.join(' | ')} |`;
	return [line(head), line(head.map((_, i) => (i === 0 ? '---' : '---:'))), ...rows.map(line)].join('\n');
}

/** Two digits, rounded up: the last digits differ between machines and must not show. */
export function upper(value: number): string {
	if (!(value > 0)) return Number.isNaN(value) ? 'no data' : '0';
	if (value < 1e-9) return '< 1e-9';
	const exponent = Math.floor(Math.log10(value)) - 1;
	const rounded = Math.ceil(value / 10 ** exponent - 0.05) * 10 ** exponent;
	return Number(rounded.toPrecision(2)).toString();
}

const samplesPerCycle = ({ samplingRate_Hz, frequency_Hz }: SteadyCase) => samplingRate_Hz / frequency_Hz;
const isFull = (one: SteadyCase) => samplesPerCycle(one) > 127.999;
const most = <E>(list: readonly E[], of: (errors: E) => number) => Math.max(...list.map(of));

/** Rows by sampling rate, the worst of all fundamentals in each. */
export function steadyTable(measured: Measured<SteadyCase, SteadyErrors>): string {
	const full = measured.filter(([one]) => isFull(one));
	const groups = new Map<string, SteadyErrors[]>();
	for (const [one, errors] of full) {
		const name = Math.abs(samplesPerCycle(one) - 128) < 1e-9 ? '128 a cycle' : `${one.samplingRate_Hz}`;
		groups.set(name, [...(groups.get(name) ?? []), errors]);
	}
	const rows = [...groups].map(([name, list]): Row => [
		name,
		list.length,
		Math.min(...list.map(({ highestOrder }) => highestOrder)),
		upper(most(list, (errors) => errors.magnitude_pct)),
		upper(most(list, (errors) => errors.phaseOfFirst_deg)),
		upper(most(list, (errors) => errors.phaseOfHighest_deg)),
		upper(most(list, (errors) => errors.frequency * 1e6))
	]);
	const head = [
		'samples/s',
		'fundamentals',
		'order reached',
		'magnitude, %',
		'phase of order 1, °',
		'phase of order 50, °',
		'frequency, ppm'
	];
	const { magnitude_pct, phaseOfFirst_deg, phaseOfHighest_deg } = STEADY_LIMITS;
	return table(head, [
		...rows,
		['**limit**', '', '', magnitude_pct, phaseOfFirst_deg, phaseOfHighest_deg, '']
	]);
}

/** Rates that give less than 128 samples a cycle. */
export function slowTable(measured: Measured<SteadyCase, SteadyErrors>): string {
	const rows = measured
		.filter(([one]) => !isFull(one))
		.map(([one, errors]): Row => [
			one.samplingRate_Hz,
			one.frequency_Hz,
			samplesPerCycle(one).toFixed(1),
			errors.highestOrder,
			upper(errors.magnitude_pct),
			upper(errors.phaseOfFirst_deg),
			upper(errors.phaseOfHighest_deg)
		]);
	return table(
		[
			'samples/s',
			'fundamental, Hz',
			'samples a cycle',
			'highest order',
			'magnitude, %',
			'phase of order 1, °',
			'of the highest, °'
		],
		rows
	);
}

export function roundedTable(measured: Measured<SteadyCase, SteadyErrors>): string {
	const byRate = new Map<number, SteadyErrors[]>();
	for (const [one, errors] of measured.filter(([one]) => isFull(one)))
		if (one.samplingRate_Hz % 1 === 0)
			byRate.set(one.samplingRate_Hz, [...(byRate.get(one.samplingRate_Hz) ?? []), errors]);
	const rows = [...byRate]
		.filter(([, list]) => list.length > 2)
		.map(([rate, list]): Row => [
			rate,
			list.length,
			upper(most(list, (errors) => errors.rmsError_pct)),
			upper(most(list, (errors) => errors.explained_pct)),
			most(list, (errors) => errors.rmsError_pct / errors.explained_pct).toFixed(2),
			upper(most(list, (errors) => errors.magnitude_pct))
		]);
	return table(
		[
			'samples/s',
			'fundamentals',
			'rms error, %',
			'rounding explains, %',
			'greatest ratio',
			'worst single error, %'
		],
		[...rows, ['**limit**', '', '', '', MOST_BEYOND_ROUNDING, '']]
	);
}

export function movingTable(measured: Measured<MovingCase, MovingErrors>): string {
	const rows = measured.map(([one, errors]): Row => [
		`${one.nominalFrequency_Hz} Hz, ${one.title}`,
		errors.windowCount,
		upper(errors.length_pct),
		upper(errors.subgroupUse),
		errors.subgroupOrder,
		upper(errors.componentUse),
		errors.componentOrder
	]);
	const head = [
		'signal',
		'windows',
		'length, %',
		'subgroups: share used',
		'at order',
		'lines: share used',
		'at order'
	];
	return table(head, [...rows, ['**limit**', '', '', 1, '', 1, '']]);
}

export function stateTable(
	measured: Measured<TestingState & { nominalFrequency_Hz: number }, StateErrors>
): string {
	const rows = measured.map(([one, errors]): Row => [
		`${one.nominalFrequency_Hz} Hz, ${one.title}`,
		upper(errors.frequency_Hz),
		upper(errors.voltage_pct),
		upper(errors.u2_pct),
		upper(errors.u0_pct),
		upper(errors.putInUse),
		upper(errors.harmonicUse)
	]);
	const { frequency_Hz, voltage_pct, unbalance_pct } = STATE_LIMITS;
	return table(
		[
			'state',
			'frequency, Hz',
			'voltage, % of declared',
			'u2, % points',
			'u0, % points',
			'orders put in: share used',
			'all orders: share used'
		],
		[...rows, ['**limit**', frequency_Hz, voltage_pct, unbalance_pct, unbalance_pct, 1, 1]]
	);
}

export function stepTable(measured: Measured<StepCase, StepErrors>): string {
	const rows = measured.map(([one, errors]): Row => [
		`${one.nominalFrequency_Hz} Hz: ${one.level_pct} % for ${one.cycles} cycles`,
		errors.kind,
		upper(Math.abs(errors.level_pct)),
		errors.duration_cycles.toFixed(2)
	]);
	return table(
		['step', 'found', 'level, % points', 'duration less truth, cycles'],
		[...rows, ['**limit**', '', 0.2, '± 1']]
	);
}
