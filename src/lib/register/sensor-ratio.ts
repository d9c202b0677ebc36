import { err, ok, type Result } from '../result';
import { parseQuantity, type QuantityKind } from '../units/quantity-input';
import { sensorQuantity, type MarkedRatio, type SensorKind } from './sensor-facts';
import { tidyQuantity, withoutBinaryTail } from './tidy-quantity';

const EXAMPLES: Record<SensorKind, string> = {
	'current-transformer': '200 : 5 A',
	clamp: '1000 A : 1 V or 10 mV/A',
	'flexible-coil': '3000 A : 3 V or 1 mV/A',
	shunt: '100 A : 60 mV',
	'voltage-transformer': '14.4 kV : 120 V',
	'voltage-lead': '1 : 1, or 10 : 1 V for a divider'
};

/** "1 mV/A", "100 mV per A", "60mV / 100A": what comes out for each ampere or volt, as clamps are marked. */
const SENSITIVITY = /^(.+?m?v)\s*(?:\/|per)\s*([\d.,]*)\s*(k?[av])$/i;

function side(kind: QuantityKind, text: string): number | null {
	const parsed = parseQuantity(kind, text);
	return parsed.ok && parsed.value > 0 ? withoutBinaryTail(parsed.value) : null;
}

/** The secondary, kept in the unit that it was typed in; without one amperes of a current transformer, volts else. */
function secondaryOf(kind: SensorKind, text: string): Omit<MarkedRatio, 'primary'> | null {
	const unit = /[a-z]*$/i.exec(text.trim())?.[0].toLowerCase() ?? '';
	const isCurrent = unit === '' ? kind === 'current-transformer' : /^m?a/.test(unit);
	// A shunt, a coil or a voltage sensor gives a voltage.
	if (isCurrent && kind !== 'current-transformer' && kind !== 'clamp') return null;
	const value = side(isCurrent ? 'current' : 'voltage', text);
	if (value === null) return null;
	// "333 mV" must come back as 333 mV.
	const inMillivolts = unit === 'mv';
	return {
		secondary: inMillivolts ? withoutBinaryTail(value * 1000) : value,
		secondaryUnit: isCurrent ? 'A' : inMillivolts ? 'mV' : 'V'
	};
}

/**
 * Reads the ratio of a sensor as it is marked: "1000 A : 1 V", "200 : 5 A", "200/5", "3000 A / 333 mV", "10 mV/A",
 * "100 A : 60 mV", "14.4 kV : 120 V".
 * returns  primary in A or V and the secondary in its own unit, or a sentence that says what to enter
 */
export function parseSensorRatio(kind: SensorKind, text: string): Result<MarkedRatio, string> {
	const hint = `Enter the ratio as marked, primary first, for example ${EXAMPLES[kind]}.`;
	const primaryKind = sensorQuantity(kind);
	const sensitivity = SENSITIVITY.exec(text.trim());
	// "14.4 kV/120 V" is a ratio and no sensitivity: there the larger side comes first.
	if (sensitivity !== null && primaryKind === 'current' && /[aA]$/.test(text.trim())) {
		const secondary = secondaryOf(kind, sensitivity[1] ?? '');
		const primary = side('current', `${sensitivity[2] === '' ? '1' : sensitivity[2]} ${sensitivity[3]}`);
		if (secondary === null || primary === null) return err(hint);
		return ok({ primary, ...secondary });
	}
	const sides = text.split(/\s*[/:]\s*/);
	const [left, right] = sides;
	if (sides.length !== 2 || left === undefined || right === undefined) return err(hint);
	const primary = side(primaryKind, left);
	const secondary = secondaryOf(kind, right);
	if (primary === null) return err(hint);
	if (secondary === null) {
		const gives = kind === 'current-transformer' || kind === 'clamp' ? 'A, V or mV' : 'V or mV';
		return err(`The secondary of a ${kind.replace('-', ' ')} is given in ${gives}. ${hint}`);
	}
	return ok({ primary, ...secondary });
}

/** "1000 A : 1 V", as it is put into its field; reading it again gives the same ratio. */
export function formatSensorRatio(kind: SensorKind, ratio: MarkedRatio): string {
	const unit = sensorQuantity(kind) === 'current' ? 'A' : 'V';
	const plain = (value: number) => tidyQuantity('number', value);
	return `${plain(ratio.primary)} ${unit} : ${plain(ratio.secondary)} ${ratio.secondaryUnit}`;
}

/**
 * What one volt or ampere at the input stands for on the primary side.
 * returns  A or V of the primary for each V or A of the secondary
 */
export function toPrimaryFactor({ primary, secondary, secondaryUnit }: MarkedRatio): number {
	// Over a thousand last: 333 mV is no exact binary share of a volt.
	return secondaryUnit === 'mV' ? (primary * 1000) / secondary : primary / secondary;
}
