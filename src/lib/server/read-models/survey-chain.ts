import { inputToPrimary } from '../../recording/measuring-input';
import { sensorError_pct, type SensorFacts, type SensorKind } from '../../register/sensor-facts';
import type { MeasuringChain, Quantity, Resolution, TransducerKind } from '../../uncertainty/measuring-chain';
import { samplesPerWindow, stepOfInput } from '../../uncertainty/recorder-resolution';
import { chainOf, type SensorInChain } from '../../uncertainty/survey-chain';
import type { Db } from '../db/database';
import type { CaptureRow, InstrumentRow, PointRow } from '../db/rows';
import { pointsRepository } from '../repositories/points.repository';
import type { Scope } from '../repositories/scope';
import { surveysRepository } from '../repositories/surveys.repository';
import type { StoredFacts } from './capture-list';
import { toInputSensor } from './measuring-instrument';
import { analysedCaptures, surveyEquipment, type Equipment, type EquipmentInput } from './survey-equipment';

type PointRatios = Pick<
	PointRow,
	'nominal_frequency_hz' | 'ct_primary_a' | 'ct_secondary_a' | 'vt_primary_v' | 'vt_secondary_v'
>;

/** Low voltage ends here (IEC 60038). */
const LOW_VOLTAGE_MOST_V = 1000;

const KINDS: Record<Exclude<SensorKind, 'voltage-transformer'>, TransducerKind> = {
	'current-transformer': 'current-transformer',
	clamp: 'current-clamp',
	'flexible-coil': 'flexible-coil',
	shunt: 'shunt',
	'voltage-lead': 'voltage-divider'
};

function kindInChain({ kind, ratio }: SensorFacts): TransducerKind {
	if (kind !== 'voltage-transformer') return KINDS[kind];
	if (ratio === null) return 'not-known';
	return ratio.primary > LOW_VOLTAGE_MOST_V ? 'inductive-voltage-transformer' : 'low-voltage-transformer';
}

/** A plain lead adds nothing; one that divides, or of which an error is stated, does. */
function isPlainLead(facts: SensorFacts): boolean {
	const divides = facts.ratio !== null && facts.ratio.primary !== facts.ratio.secondary;
	return facts.kind === 'voltage-lead' && !divides && sensorError_pct(facts) === null;
}

/** flat_pct: the error that the instrument states for sensors whose own is not known. */
function sensorInChain(facts: SensorFacts, flat_pct: number | null): SensorInChain {
	return {
		kind: kindInChain(facts),
		error_pct: sensorError_pct(facts) ?? flat_pct,
		phaseError_deg: facts.phaseError_deg,
		highestFrequency_Hz: facts.highestFrequency_Hz,
		ratedPrimary_A: facts.kind === 'current-transformer' ? (facts.ratio?.primary ?? null) : null
	};
}

/** All inputs of a quantity by one sensor that is no better than any of them. Null: measured directly. */
function worstOf(sensors: readonly SensorInChain[]): SensorInChain | null {
	const [first, ...rest] = [...sensors].sort((a, b) => (b.error_pct ?? Infinity) - (a.error_pct ?? Infinity));
	if (first === undefined) return null;
	return rest.reduce<SensorInChain>(
		(worst, one) => ({
			...worst,
			phaseError_deg:
				worst.phaseError_deg === null || one.phaseError_deg === null
					? null
					: Math.max(worst.phaseError_deg, one.phaseError_deg),
			highestFrequency_Hz:
				worst.highestFrequency_Hz === null || one.highestFrequency_Hz === null
					? (worst.highestFrequency_Hz ?? one.highestFrequency_Hz)
					: Math.min(worst.highestFrequency_Hz, one.highestFrequency_Hz)
		}),
		first
	);
}

const inputsOf = (equipment: Equipment, quantity: Quantity): EquipmentInput[] =>
	equipment.usedInputs.filter((input) => input.row.quantity === quantity);

/** The sensors of a quantity over all instruments; those without listed inputs stand by their flat error. */
function sensorsOf(equipment: readonly Equipment[], quantity: Quantity): SensorInChain[] {
	return equipment.flatMap((one) => {
		const { current_sensor_error_pct, voltage_sensor_error_pct } = one.instrument;
		const flat_pct = quantity === 'current' ? current_sensor_error_pct : voltage_sensor_error_pct;
		const inputs = inputsOf(one, quantity);
		const flat: SensorInChain[] =
			flat_pct === null
				? []
				: [
						{
							kind: 'not-known',
							error_pct: flat_pct,
							phaseError_deg: null,
							highestFrequency_Hz: null,
							ratedPrimary_A: null
						}
					];
		if (inputs.length === 0) return flat;
		return inputs.flatMap(({ sensor }) =>
			sensor === null ? flat : isPlainLead(sensor.facts) ? [] : [sensorInChain(sensor.facts, flat_pct)]
		);
	});
}

function factorOf({ row, sensor }: EquipmentInput, point: PointRatios): number | null {
	const transformer =
		row.quantity === 'current'
			? point.ct_primary_a !== null && point.ct_secondary_a !== null
				? { primary: point.ct_primary_a, secondary: point.ct_secondary_a }
				: null
			: point.vt_primary_v !== null && point.vt_secondary_v !== null
				? { primary: point.vt_primary_v, secondary: point.vt_secondary_v }
				: null;
	const known = sensor && toInputSensor(sensor.facts);
	// A range in amperes at an input that gets volts, or the other way round, says nothing of the input.
	if (row.range_unit !== (row.quantity === 'voltage' || known?.gives === 'voltage' ? 'V' : 'A')) return null;
	return (
		inputToPrimary({ name: row.name, quantity: row.quantity, sensor: known }, transformer)?.toPrimary ?? null
	);
}

/** Greatest of a figure over the inputs of a quantity; null where it is not known of one of them, or there is none. */
function greatest(
	equipment: readonly Equipment[],
	quantity: Quantity,
	figureOf: (input: EquipmentInput) => number | null
): number | null {
	const figures = equipment.flatMap((one) => inputsOf(one, quantity).map(figureOf));
	if (figures.length === 0 || equipment.some((one) => inputsOf(one, quantity).length === 0)) return null;
	return figures.reduce((most, one) => (most === null || one === null ? null : Math.max(most, one)));
}

function stepOf(input: EquipmentInput, point: PointRatios): number | null {
	const { range_rms, resolution_bits } = input.row;
	const factor = factorOf(input, point);
	return range_rms === null || resolution_bits === null || factor === null
		? null
		: stepOfInput(range_rms, resolution_bits) * factor;
}

/** Lowest sampling rate of the captures; null where one is a log or tells none. */
function lowestRate_Hz(captures: readonly CaptureRow[]): number | null {
	const rates = captures.map((capture) => {
		const { samplingRate_Hz } = JSON.parse(capture.facts_json) as StoredFacts;
		return capture.kind === 'waveform' ? (samplingRate_Hz?.lowest ?? null) : null;
	});
	if (rates.length === 0) return null;
	return rates.reduce((least, one) => (least === null || one === null ? null : Math.min(least, one)));
}

function resolutionOf(equipment: readonly Equipment[], point: PointRatios): Resolution | null {
	const step_V = greatest(equipment, 'voltage', (input) => stepOf(input, point));
	const step_A = greatest(equipment, 'current', (input) => stepOf(input, point));
	const rate_Hz = lowestRate_Hz(equipment.flatMap((one) => one.captures));
	if (rate_Hz === null || (step_V === null && step_A === null)) return null;
	// One window behind a value: what is averaged over more of them only errs less.
	return { step_V, step_A, samplesPerWindow: samplesPerWindow(rate_Hz), windowsPerValue: 1 };
}

/** The class that counts when several instruments took part; null where one is not known. */
function classOf(instruments: readonly InstrumentRow[]): 'I' | 'II' | null {
	const classes = instruments.map((instrument) => instrument.harmonic_class);
	if (classes.length === 0 || classes.includes('unknown')) return null;
	return classes.includes('II') ? 'II' : 'I';
}

/**
 * What the register knows of a survey's measuring chain. Where several instruments or sensors took part the chain is no
 * better than the worst of them; the rest is assumed on the safe side or said to be not known.
 */
export function surveyChain(equipment: readonly Equipment[], point: PointRatios): MeasuringChain {
	const withInputs = equipment.some((one) => one.usedInputs.length > 0);
	const flat = (column: 'voltage_sensor_error_pct' | 'current_sensor_error_pct') =>
		equipment.length === 1 ? (equipment[0]?.instrument[column] ?? null) : null;
	const listed = withInputs || equipment.length > 1;
	return chainOf({
		nominalFrequency_Hz: point.nominal_frequency_hz,
		instrumentClass: classOf(equipment.map((one) => one.instrument)),
		voltageSensorError_pct: flat('voltage_sensor_error_pct'),
		currentSensorError_pct: flat('current_sensor_error_pct'),
		...(listed && {
			voltageSensor: worstOf(sensorsOf(equipment, 'voltage')),
			currentSensor: worstOf(sensorsOf(equipment, 'current')),
			currentRange_A: greatest(equipment, 'current', (input) => {
				const factor = factorOf(input, point);
				return factor === null || input.row.range_rms === null ? null : input.row.range_rms * factor;
			}),
			resolution: resolutionOf(equipment, point)
		}),
		voltageTransformerPrimary_V: point.vt_primary_v,
		currentTransformerPrimary_A: point.ct_primary_a
	});
}

/** The measuring chain behind a survey as the register states it today. The survey has to be one of the scope. */
export async function loadSurveyChain(db: Db, scope: Scope, surveyId: string): Promise<MeasuringChain> {
	const survey = await surveysRepository(db, scope).byId(surveyId);
	const point = survey && (await pointsRepository(db, scope).byId(survey.point_id));
	if (!survey || !point) throw new Error(`no point behind survey ${surveyId}`);
	const captures = await analysedCaptures(db, scope, surveyId);
	return surveyChain(await surveyEquipment(db, scope, surveyId, captures), point);
}
