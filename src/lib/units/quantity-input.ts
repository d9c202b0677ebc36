import { unit } from 'mathjs';
import { z } from 'zod';
import { err, ok, type Result } from '../result';
import { parseTypedNumber, type DecimalSign } from './typed-number';

/** Quantities that people type into forms. Values leave this module in the base unit named here. */
export type QuantityKind = keyof typeof QUANTITIES;

interface Quantity {
	/** As it stands in a sentence. */
	name: string;
	baseUnit: string;
	/** Unit meant when only a number is typed; the form shows it inside the field. */
	bareUnit: string;
	/** Accepted spellings → unit of the calculator; matched exactly first, then without regard to case. */
	units: Record<string, string>;
	example: string;
}

const QUANTITIES = {
	voltage: {
		name: 'a voltage',
		baseUnit: 'V',
		bareUnit: 'V',
		units: { V: 'V', kV: 'kV', mV: 'mV', MV: 'MV', volt: 'V', volts: 'V' },
		example: '480 V or 13.8 kV'
	},
	current: {
		name: 'a current',
		baseUnit: 'A',
		bareUnit: 'A',
		units: { A: 'A', kA: 'kA', mA: 'mA', amp: 'A', amps: 'A', ampere: 'A', amperes: 'A' },
		example: '1284 A or 31.4 kA'
	},
	'apparent-power': {
		name: 'an apparent power',
		baseUnit: 'VA',
		bareUnit: 'kVA',
		units: { VA: 'VA', kVA: 'kVA', MVA: 'MVA', GVA: 'GVA' },
		example: '1500 kVA or 1.5 MVA'
	},
	'fault-level': {
		name: 'a fault level',
		baseUnit: 'VA',
		bareUnit: 'MVA',
		units: { VA: 'VA', kVA: 'kVA', MVA: 'MVA', GVA: 'GVA' },
		example: '250 MVA'
	},
	'active-power': {
		name: 'a power',
		baseUnit: 'W',
		bareUnit: 'kW',
		units: { W: 'W', kW: 'kW', MW: 'MW', watt: 'W', watts: 'W' },
		example: '640 kW'
	},
	impedance: {
		name: 'an impedance',
		baseUnit: 'ohm',
		bareUnit: 'ohm',
		units: { ohm: 'ohm', ohms: 'ohm', Ω: 'ohm', mΩ: 'mohm', mohm: 'mohm' },
		example: '0.15 ohm'
	},
	frequency: {
		name: 'a frequency',
		baseUnit: 'Hz',
		bareUnit: 'Hz',
		units: { Hz: 'Hz', kHz: 'kHz' },
		example: '60 Hz'
	},
	duration: {
		name: 'a duration',
		baseUnit: 's',
		bareUnit: 's',
		units: { s: 's', ms: 'ms', min: 'minute', h: 'hour', d: 'day' },
		example: '10 min'
	},
	percent: {
		name: 'a percentage',
		baseUnit: '%',
		bareUnit: '%',
		units: { '%': '%', pct: '%', percent: '%', 'per cent': '%' },
		example: '5.75 %'
	},
	number: { name: 'a number', baseUnit: '', bareUnit: '', units: {}, example: '0.92' }
} as const satisfies Record<string, Quantity>;

export interface QuantityOptions {
	/** The decimal sign of the person's locale, for inputs such as "1,284" that could be either. Default '.'. */
	decimal?: DecimalSign;
	/** Unit meant by a bare number, when the form shows another than the usual one. */
	bareUnit?: string;
}

/** "13.8kV" → ["13.8", "kV"]: digits with their signs and spaces first, the unit after them. */
const NUMBER_THEN_UNIT = /^([+-]?[\d.,'’\s\u00a0\u202f]*\d(?:[.,])?(?:[eE][+-]?\d+)?)\s*(.*)$/u;

/**
 * The calculator's unit for what was typed. Letter case is forgiven ("480 v", "13.8 KV") except where it
 * changes the meaning: milli against mega.
 */
function unitFor(quantity: Quantity, typed: string): string | null {
	const exact = quantity.units[typed];
	if (exact !== undefined) return exact;
	const folded = typed.toLowerCase();
	const matches = new Set(
		Object.entries(quantity.units)
			.filter(([spelling]) => spelling.toLowerCase() === folded)
			.map(([, target]) => target)
	);
	const [only] = matches;
	return matches.size === 1 && only !== undefined ? only : null;
}

/** Converts by the calculator; percentages and plain numbers have nothing to convert. */
function toBase(value: number, from: string, quantity: Quantity): number {
	if (from === quantity.baseUnit) return value;
	return unit(value, from).toNumber(quantity.baseUnit);
}

/**
 * Reads a quantity as people type it: "13.8 kV", "13,8 kV", "1500 kVA", "5.75 %", "1 284 A", "480".
 * returns  the value in the base unit (V, A, VA, W, ohm, Hz, s, percent), or a sentence that says what to enter
 */
export function parseQuantity(
	kind: QuantityKind,
	text: string,
	options: QuantityOptions = {}
): Result<number, string> {
	const quantity: Quantity = QUANTITIES[kind];
	const trimmed = text.trim();
	if (trimmed === '') return err(`Enter ${quantity.name}, for example ${quantity.example}.`);
	const parts = NUMBER_THEN_UNIT.exec(trimmed);
	if (parts === null)
		return err(`“${trimmed}” is not ${quantity.name}. Enter for example ${quantity.example}.`);
	const value = parseTypedNumber(parts[1] ?? '', options.decimal ?? '.');
	if (value === null) {
		return err(
			`“${trimmed}” cannot be read as one number. Enter ${quantity.name} such as ${quantity.example}.`
		);
	}
	const typedUnit = (parts[2] ?? '').trim();
	const from = typedUnit === '' ? (options.bareUnit ?? quantity.bareUnit) : unitFor(quantity, typedUnit);
	if (from === null) {
		return err(
			`“${typedUnit}” is not a unit of ${quantity.name.replace(/^an? /, '')}. Enter for example ${quantity.example}.`
		);
	}
	return ok(toBase(value, from, quantity));
}

export interface QuantitySchemaOptions extends QuantityOptions {
	/** Smallest allowed value in the base unit, exclusive. Default 0: a magnitude is positive. */
	above?: number;
	/** Largest allowed value in the base unit, inclusive. */
	atMost?: number;
}

/** zod string → number in the base unit, with the sentence of the refusal as its message. */
export function quantitySchema(kind: QuantityKind, options: QuantitySchemaOptions = {}) {
	const quantity: Quantity = QUANTITIES[kind];
	const above = options.above ?? 0;
	return z.string().transform((text, context) => {
		const parsed = parseQuantity(kind, text, options);
		if (!parsed.ok) {
			context.addIssue({ code: 'custom', message: parsed.problem });
			return z.NEVER;
		}
		const { value } = parsed;
		const tooLarge = options.atMost !== undefined && value > options.atMost;
		if (value <= above || tooLarge) {
			const most = options.atMost === undefined ? '' : ` and at most ${options.atMost} ${quantity.baseUnit}`;
			const floor = `${above} ${quantity.baseUnit}`.trim();
			context.addIssue({ code: 'custom', message: `Enter ${quantity.name} above ${floor}${most}.` });
			return z.NEVER;
		}
		return value;
	});
}

/** As quantitySchema, but an empty field is null: "not known" is an answer. */
export function optionalQuantitySchema(kind: QuantityKind, options: QuantitySchemaOptions = {}) {
	return z.union([
		z
			.string()
			.refine((text) => text.trim() === '')
			.transform(() => null),
		quantitySchema(kind, options)
	]);
}
