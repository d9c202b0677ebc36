import { emptyOrderPhasors, readOrderPhasors, type OrderPhasors } from '../order-phasors';
import { sequenceOfOrder } from '../sequence/order-sequences';
import { lineToLineSquares } from './effective-power';
import type { ConductorReader, PointWindows } from './point-windows';

/** Sums over windows from which the effective quantities and the positive sequence of three phases follow. */
export class EffectiveSums {
	readonly #fourWire: boolean;
	readonly #neutralMeasured: boolean;
	readonly #highestOrder: number;
	readonly #neutral: OrderPhasors = emptyOrderPhasors();
	#neutralSquare = NaN;
	#voltage = 0;
	#voltage1 = 0;
	#current = 0;
	#current1 = 0;
	#positiveVoltage = 0;
	#positiveCurrent = 0;
	#positiveActive = 0;
	#positiveReactive = 0;
	/** The rotation is told from the sums of both senses, kept side by side until then. */
	#turned = { voltage: 0, current: 0, active: 0, reactive: 0 };

	constructor(point: PointWindows) {
		this.#fourWire = point.system === 'four-wire';
		this.#neutralMeasured = this.#fourWire && point.currents.N !== undefined;
		this.#highestOrder = point.highestOrder;
	}

	get neutral(): 'measured' | 'computed' | null {
		if (!this.#fourWire) return null;
		return this.#neutralMeasured ? 'measured' : 'computed';
	}

	/** Reads the neutral of the window; false when it is measured and has no data there. */
	canRead(point: PointWindows, window: number): boolean {
		const rows = point.currents.N;
		if (!this.#neutralMeasured || !rows) return true;
		readOrderPhasors(rows, window, this.#highestOrder, this.#neutral);
		this.#neutralSquare = rows.rms[window]! ** 2;
		return !Number.isNaN(this.#neutralSquare) && !Number.isNaN(this.#neutral.re[1]!);
	}

	/** Adds the window that the readers hold. */
	add(voltages: ConductorReader, currents: ConductorReader): void {
		const u = this.#effectiveVoltageSquares(voltages);
		const i = this.#effectiveCurrentSquares(currents);
		this.#voltage += u.all;
		this.#voltage1 += u.fundamental;
		this.#current += i.all;
		this.#current1 += i.fundamental;
		const straight = sequencePower(voltages, currents, 1);
		this.#positiveVoltage += straight.voltage;
		this.#positiveCurrent += straight.current;
		this.#positiveActive += straight.active;
		this.#positiveReactive += straight.reactive;
		const turned = sequencePower(voltages, currents, -1);
		this.#turned.voltage += turned.voltage;
		this.#turned.current += turned.current;
		this.#turned.active += turned.active;
		this.#turned.reactive += turned.reactive;
	}

	levels(count: number) {
		const straight = this.#positiveVoltage >= this.#turned.voltage;
		const pick = (own: number, other: number) => (straight ? own : other) / count;
		return {
			voltage_V: Math.sqrt(this.#voltage / count),
			fundamentalVoltage_V: Math.sqrt(this.#voltage1 / count),
			current_A: Math.sqrt(this.#current / count),
			fundamentalCurrent_A: Math.sqrt(this.#current1 / count),
			positiveVoltage_V: Math.sqrt(pick(this.#positiveVoltage, this.#turned.voltage)),
			positiveCurrent_A: Math.sqrt(pick(this.#positiveCurrent, this.#turned.current)),
			positiveActivePower_W: pick(this.#positiveActive, this.#turned.active),
			positiveReactivePower_var: pick(this.#positiveReactive, this.#turned.reactive)
		};
	}

	#zeroSquares(reader: ConductorReader): number {
		let sum = 0;
		for (let order = 0; order <= this.#highestOrder; order++) sum += zeroSquare(reader, order);
		return sum;
	}

	#effectiveVoltageSquares(voltages: ConductorReader): { all: number; fundamental: number } {
		const phases = voltages.squares.reduce((sum, square) => sum + square, 0);
		const phases1 = fundamentalSquares(voltages);
		const pairs = Number.isNaN(voltages.lineToLineSquares)
			? lineToLineSquares(phases, this.#zeroSquares(voltages))
			: voltages.lineToLineSquares;
		const pairs1 = lineToLineSquares(phases1, zeroSquare(voltages, 1));
		// Without a zero sequence in sight, four wires are seen as three.
		return this.#fourWire && voltages.origin === 'conductor'
			? { all: (3 * phases + pairs) / 18, fundamental: (3 * phases1 + pairs1) / 18 }
			: { all: pairs / 9, fundamental: pairs1 / 9 };
	}

	#effectiveCurrentSquares(currents: ConductorReader): { all: number; fundamental: number } {
		const lines = currents.squares.reduce((sum, square) => sum + square, 0);
		const lines1 = fundamentalSquares(currents);
		if (!this.#fourWire) return { all: lines / 3, fundamental: lines1 / 3 };
		if (this.#neutralMeasured)
			return {
				all: (lines + this.#neutralSquare) / 3,
				fundamental: (lines1 + this.#neutral.re[1]! ** 2 + this.#neutral.im[1]! ** 2) / 3
			};
		return {
			all: (lines + 9 * this.#zeroSquares(currents)) / 3,
			fundamental: (lines1 + 9 * zeroSquare(currents, 1)) / 3
		};
	}
}

function zeroSquare(reader: ConductorReader, order: number): number {
	const { re, im } = sequenceOfOrder(...triple(reader), order, 0);
	return re * re + im * im;
}

function sequencePower(voltages: ConductorReader, currents: ConductorReader, sense: 1 | -1) {
	const u = sequenceOfOrder(...triple(voltages), 1, sense);
	const i = sequenceOfOrder(...triple(currents), 1, sense);
	return {
		voltage: u.re * u.re + u.im * u.im,
		current: i.re * i.re + i.im * i.im,
		active: 3 * (u.re * i.re + u.im * i.im),
		reactive: 3 * (u.im * i.re - u.re * i.im)
	};
}

function triple(reader: ConductorReader): [OrderPhasors, OrderPhasors, OrderPhasors] {
	return [reader.phasors[0]!, reader.phasors[1]!, reader.phasors[2]!];
}

function fundamentalSquares(reader: ConductorReader): number {
	return reader.phasors.reduce((sum, phasor) => sum + phasor.re[1]! ** 2 + phasor.im[1]! ** 2, 0);
}
