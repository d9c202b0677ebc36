import type { PhaseNames } from '../recording/phase';
import { parseQuantity, type QuantityKind } from '../units/quantity-input';
import { PHASE_PRESETS, presetOf } from './phase-name-presets';
import type { Demand, PointFacts, ShortCircuit } from './point-facts';
import { MONTHS, type PointForm } from './point-form';
import { formatRatio, parseRatio, type RatioKind } from './ratio-input';
import { tidyQuantity, withoutBinaryTail } from './tidy-quantity';

/** A positive quantity, or null while the text is not one. */
function read(kind: QuantityKind, text: string): number | null {
	const parsed = parseQuantity(kind, text);
	return parsed.ok && parsed.value > 0 ? withoutBinaryTail(parsed.value) : null;
}

export function readNominalVoltage_V(form: Pick<PointForm, 'nominalVoltage'>): number | null {
	return read('voltage', form.nominalVoltage);
}

function readMonthly(form: PointForm): Demand | null {
	const kind = form.demandQuantity === 'active' ? 'active-power' : 'apparent-power';
	const demands = form.monthlyDemands.map((month) => (month.trim() === '' ? null : read(kind, month)));
	const unreadable = form.monthlyDemands.some((month, i) => month.trim() !== '' && demands[i] === null);
	if (unreadable || demands.every((month) => month === null)) return null;
	const powerFactor = form.demandQuantity === 'active' ? read('number', form.powerFactor) : null;
	if (form.demandQuantity === 'active' && (powerFactor === null || powerFactor > 1)) return null;
	return {
		method: 'monthly',
		quantity: form.demandQuantity,
		demands: [...demands, ...Array<null>(MONTHS).fill(null)].slice(0, MONTHS),
		powerFactor,
		source: form.demandSource
	};
}

/** The demand as far as it can be read; null while something in it is missing or wrong. */
export function readDemand(form: PointForm): Demand | null {
	if (form.demandMethod === 'unknown') return { method: 'unknown' };
	if (form.demandMethod === 'monthly') return readMonthly(form);
	const demandCurrent_A = read('current', form.demandCurrent);
	return demandCurrent_A === null ? null : { method: 'entered', demandCurrent_A, source: form.demandSource };
}

function readTransformer(form: PointForm): ShortCircuit | null {
	const rating_VA = read('apparent-power', form.transformerRating);
	const impedance_pct = read('percent', form.transformerImpedance);
	const upstream = form.upstreamFaultLevel.trim();
	const upstreamFaultLevel_VA = upstream === '' ? null : read('fault-level', upstream);
	if (rating_VA === null || impedance_pct === null) return null;
	if (upstream !== '' && upstreamFaultLevel_VA === null) return null;
	return {
		method: 'transformer',
		rating_VA,
		impedance_pct,
		upstreamFaultLevel_VA,
		source: form.shortCircuitSource
	};
}

/** The short circuit as far as it can be read; null while something in it is missing or wrong. */
export function readShortCircuit(form: PointForm): ShortCircuit | null {
	const source = form.shortCircuitSource;
	switch (form.shortCircuitMethod) {
		case 'unknown':
			return { method: 'unknown' };
		case 'transformer':
			return readTransformer(form);
		case 'current': {
			const shortCircuitCurrent_A = read('current', form.shortCircuitCurrent);
			return shortCircuitCurrent_A === null ? null : { method: 'current', shortCircuitCurrent_A, source };
		}
		case 'fault-level': {
			const faultLevel_VA = read('fault-level', form.faultLevel);
			return faultLevel_VA === null ? null : { method: 'fault-level', faultLevel_VA, source };
		}
	}
}

function readRatio(kind: RatioKind, text: string) {
	const parsed = parseRatio(kind, text);
	return parsed.ok ? parsed.value : null;
}

function readPhaseNames(form: PointForm): PhaseNames {
	if (form.phasePreset !== 'own') return { ...PHASE_PRESETS[form.phasePreset] };
	return { L1: form.phaseL1, L2: form.phaseL2, L3: form.phaseL3, N: form.phaseN };
}

function must<T>(value: T | null): T {
	if (value === null) throw new Error('the form was not checked before it was turned into facts');
	return value;
}

/** Facts of a form that pointFormSchema has accepted; throws on any other. */
export function pointFactsFromForm(form: PointForm): PointFacts {
	return {
		name: form.name,
		kind: form.kind,
		system: form.system,
		nominalVoltage_V: must(readNominalVoltage_V(form)),
		nominalFrequency_Hz: form.nominalFrequency === '50' ? 50 : 60,
		demand: must(readDemand(form)),
		shortCircuit: must(readShortCircuit(form)),
		phaseNames: readPhaseNames(form),
		currentTransformer: readRatio('current', form.currentRatio),
		voltageTransformer: readRatio('voltage', form.voltageRatio),
		limitSetId: form.limitSetId === '' ? null : Number(form.limitSetId),
		limitSetReason: form.limitSetReason,
		notes: form.notes
	};
}

type DemandFields = Pick<
	PointForm,
	'demandMethod' | 'demandCurrent' | 'demandQuantity' | 'monthlyDemands' | 'powerFactor' | 'demandSource'
>;

function demandFields(demand: Demand): DemandFields {
	const empty: DemandFields = {
		demandMethod: demand.method,
		demandCurrent: '',
		demandQuantity: 'active',
		monthlyDemands: Array<string>(MONTHS).fill(''),
		powerFactor: '',
		demandSource: demand.method === 'unknown' ? '' : demand.source
	};
	if (demand.method === 'entered')
		return { ...empty, demandCurrent: tidyQuantity('current', demand.demandCurrent_A) };
	if (demand.method === 'unknown') return empty;
	const kind = demand.quantity === 'active' ? 'active-power' : 'apparent-power';
	return {
		...empty,
		demandQuantity: demand.quantity,
		monthlyDemands: demand.demands.map((month) => (month === null ? '' : tidyQuantity(kind, month))),
		powerFactor: demand.powerFactor === null ? '' : tidyQuantity('number', demand.powerFactor)
	};
}

type ShortCircuitFields = Pick<
	PointForm,
	| 'shortCircuitMethod'
	| 'shortCircuitCurrent'
	| 'faultLevel'
	| 'transformerRating'
	| 'transformerImpedance'
	| 'upstreamFaultLevel'
	| 'shortCircuitSource'
>;

function shortCircuitFields(shortCircuit: ShortCircuit): ShortCircuitFields {
	const empty: ShortCircuitFields = {
		shortCircuitMethod: shortCircuit.method,
		shortCircuitCurrent: '',
		faultLevel: '',
		transformerRating: '',
		transformerImpedance: '',
		upstreamFaultLevel: '',
		shortCircuitSource: shortCircuit.method === 'unknown' ? '' : shortCircuit.source
	};
	switch (shortCircuit.method) {
		case 'unknown':
			return empty;
		case 'current':
			return { ...empty, shortCircuitCurrent: tidyQuantity('current', shortCircuit.shortCircuitCurrent_A) };
		case 'fault-level':
			return { ...empty, faultLevel: tidyQuantity('fault-level', shortCircuit.faultLevel_VA) };
		case 'transformer': {
			const upstream_VA = shortCircuit.upstreamFaultLevel_VA;
			return {
				...empty,
				transformerRating: tidyQuantity('apparent-power', shortCircuit.rating_VA),
				transformerImpedance: tidyQuantity('percent', shortCircuit.impedance_pct),
				upstreamFaultLevel: upstream_VA === null ? '' : tidyQuantity('fault-level', upstream_VA)
			};
		}
	}
}

/** The form that shows these facts, each quantity in tidy form. */
export function pointFormFromFacts(facts: PointFacts): PointForm {
	const { phaseNames, currentTransformer, voltageTransformer } = facts;
	return {
		name: facts.name,
		kind: facts.kind,
		system: facts.system,
		nominalVoltage: tidyQuantity('voltage', facts.nominalVoltage_V),
		nominalFrequency: facts.nominalFrequency_Hz === 50 ? '50' : '60',
		...demandFields(facts.demand),
		...shortCircuitFields(facts.shortCircuit),
		phasePreset: presetOf(phaseNames),
		phaseL1: phaseNames.L1,
		phaseL2: phaseNames.L2,
		phaseL3: phaseNames.L3,
		phaseN: phaseNames.N,
		currentRatio: currentTransformer === null ? '' : formatRatio(currentTransformer),
		voltageRatio: voltageTransformer === null ? '' : formatRatio(voltageTransformer),
		limitSetId: facts.limitSetId === null ? '' : String(facts.limitSetId),
		limitSetReason: facts.limitSetReason,
		notes: facts.notes
	};
}

/** Countries with 60 Hz networks (common practice); elsewhere, and where the country is not known, 50 Hz. */
const SIXTY_HERTZ = new Set('US CA MX PR PH SA TW KR CO EC PE VE PA GT CR DO HN NI SV BR GU'.split(' '));

/** A new point's form: the practice's phase names, and the frequency of the site's country. */
export function emptyPointForm(defaults: { phaseNames: PhaseNames; country: string | null }): PointForm {
	return {
		name: '',
		kind: 'pcc',
		system: 'four-wire',
		nominalVoltage: '',
		nominalFrequency: defaults.country !== null && SIXTY_HERTZ.has(defaults.country) ? '60' : '50',
		...demandFields({ method: 'unknown' }),
		demandMethod: 'entered',
		...shortCircuitFields({ method: 'unknown' }),
		shortCircuitMethod: 'current',
		phasePreset: presetOf(defaults.phaseNames),
		phaseL1: defaults.phaseNames.L1,
		phaseL2: defaults.phaseNames.L2,
		phaseL3: defaults.phaseNames.L3,
		phaseN: defaults.phaseNames.N,
		currentRatio: '',
		voltageRatio: '',
		limitSetId: '',
		limitSetReason: '',
		notes: ''
	};
}
