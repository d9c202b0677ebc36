import { matchInputs } from '../../recording/measuring-input';
import { toInputSensor } from './measuring-instrument';
import type { SensorFacts } from '../../register/sensor-facts';
import { parseSettings } from '../analysis/capture-settings';
import type { Db } from '../db/database';
import type { CaptureRow, InstrumentChannelRow, InstrumentRow } from '../db/rows';
import { instrumentsRepository } from '../repositories/instruments.repository';
import type { Scope } from '../repositories/scope';
import { sensorsRepository, toSensorFacts } from '../repositories/sensors.repository';
import { surveysRepository } from '../repositories/surveys.repository';
import type { StoredFacts } from './capture-list';

export interface EquipmentInput {
	row: InstrumentChannelRow;
	/** Null: measured directly. */
	sensor: { id: string; facts: SensorFacts } | null;
}

/** An instrument of a survey with the captures that it took. */
export interface Equipment {
	instrument: InstrumentRow;
	inputs: EquipmentInput[];
	/** Inputs that its captures were taken through, by the channels that were confirmed; all where that cannot be told. */
	usedInputs: EquipmentInput[];
	captures: CaptureRow[];
}

/** Names and quantities of the channels that a capture's figures rest on. */
function confirmedIndexes(capture: CaptureRow): number[] | null {
	const settings = capture.mappings_json === null ? null : parseSettings(capture.mappings_json);
	return settings?.kind === 'waveform' ? settings.channels.map((channel) => channel.channelIndex) : null;
}

function usedBy(capture: CaptureRow, inputs: readonly EquipmentInput[]): Set<number> | null {
	const confirmed = confirmedIndexes(capture);
	if (confirmed === null) return null;
	const { channels } = JSON.parse(capture.facts_json) as StoredFacts;
	const matched = matchInputs(
		channels,
		inputs.map(({ row, sensor }) => ({
			name: row.name,
			quantity: row.quantity,
			sensor: sensor && toInputSensor(sensor.facts)
		}))
	);
	const found = confirmed.map((index) => matched[index] ?? null);
	return found.some((index) => index === null) ? null : new Set(found.flatMap((index) => index ?? []));
}

function usedInputs(captures: readonly CaptureRow[], inputs: EquipmentInput[]): EquipmentInput[] {
	const used = captures.map((capture) => usedBy(capture, inputs));
	if (used.length === 0 || used.some((one) => one === null)) return inputs;
	return inputs.filter((_, i) => used.some((one) => one?.has(i)));
}

/**
 * What a survey was measured with: the instruments that its captures name, or the survey's own where they name none.
 * captures   those that count; without any, the survey's own instrument alone
 */
export async function surveyEquipment(
	db: Db,
	scope: Scope,
	surveyId: string,
	captures: readonly CaptureRow[]
): Promise<Equipment[]> {
	const survey = await surveysRepository(db, scope).byId(surveyId);
	const own = survey?.instrument_id ?? null;
	const byInstrument = new Map<string, CaptureRow[]>();
	if (own !== null && captures.length === 0) byInstrument.set(own, []);
	for (const capture of captures) {
		const id = capture.instrument_id ?? own;
		if (id !== null) byInstrument.set(id, [...(byInstrument.get(id) ?? []), capture]);
	}
	const ids = [...byInstrument.keys()];
	const instruments = instrumentsRepository(db, scope);
	const channels = await instruments.inputs(ids);
	const sensors = await sensorsRepository(db, scope).byIds(channels.flatMap((one) => one.sensor_id ?? []));
	const equipment: Equipment[] = [];
	for (const [id, taken] of byInstrument) {
		const instrument = await instruments.byId(id);
		if (instrument === undefined) continue;
		const inputs = channels
			.filter((one) => one.instrument_id === id)
			.map((row) => {
				const sensor = sensors.find((one) => one.id === row.sensor_id);
				return { row, sensor: sensor ? { id: sensor.id, facts: toSensorFacts(sensor) } : null };
			});
		equipment.push({ instrument, inputs, usedInputs: usedInputs(taken, inputs), captures: taken });
	}
	return equipment;
}

/** Captures of a survey whose analysis counts. */
export async function analysedCaptures(db: Db, scope: Scope, surveyId: string): Promise<CaptureRow[]> {
	return db('captures')
		.where({ practice_id: scope.practiceId, survey_id: surveyId })
		.whereNull('removed_at')
		.whereIn(
			'id',
			db('analyses').where({ practice_id: scope.practiceId, is_current: 1 }).select('capture_id')
		)
		.orderBy('created_at')
		.orderBy('id');
}
