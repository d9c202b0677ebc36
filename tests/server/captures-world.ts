import type { ReadableStream as WebReadableStream } from 'node:stream/web';
import type { Actor } from '$lib/access/access';
import type { CaptureFile } from '$lib/recording/recording';
import type { Container } from '$lib/server/container';
import type { Db } from '$lib/server/db/database';
import { newId } from '$lib/server/db/ids';
import { runJob } from '$lib/server/jobs/run-job';
import { writeComtrade } from '$lib/synthesis/comtrade-writer';
import { synthesiseRecording } from '$lib/synthesis/waveform-recording';
import { threePhaseChannels } from '$lib/synthesis/waveform-three-phase';

const AT = '2026-03-19T09:30:00.000Z';

/** A client, a site in New York, a 480 V four-wire point and an open survey at it. */
export async function surveyAtPoint(
	db: Db,
	owner: Actor,
	point: Record<string, string | number | null> = {}
): Promise<{ surveyId: string; clientId: string; pointId: string }> {
	const ids = { clientId: newId(), siteId: newId(), pointId: newId(), surveyId: newId() };
	const own = { practice_id: owner.practiceId, client_id: ids.clientId };
	await db('clients').insert({
		id: ids.clientId,
		practice_id: owner.practiceId,
		name: 'Bellwether',
		created_at: AT
	});
	await db('sites').insert({
		id: ids.siteId,
		...own,
		name: 'Harrow Dock 4',
		time_zone: 'America/New_York',
		created_at: AT
	});
	await db('points').insert({
		id: ids.pointId,
		...own,
		site_id: ids.siteId,
		name: 'Main switchboard',
		kind: 'pcc',
		system: 'four-wire',
		nominal_voltage_v: 480,
		nominal_frequency_hz: 60,
		demand_json: '{"method":"entered","demandCurrent_A":800,"source":"nameplate"}',
		short_circuit_json: '{"method":"unknown"}',
		phase_names_json: '{"L1":"A","L2":"B","L3":"C","N":"N"}',
		created_at: AT,
		updated_at: AT,
		...point
	});
	await db('surveys').insert({
		id: ids.surveyId,
		...own,
		site_id: ids.siteId,
		point_id: ids.pointId,
		number: `S-${ids.surveyId.slice(0, 4)}`,
		title: 'Survey',
		engineer_id: owner.userId,
		created_at: AT,
		updated_at: AT
	});
	return ids;
}

/** Seven channels with a 25 % fifth in the current, primary values, as CFG and DAT without a stated zone. */
export function comtradeCapture(duration_s: number, stem = 'feeder', rate_Hz = 7680): CaptureFile[] {
	const recording = synthesiseRecording(
		{
			frequency_Hz: 60.02,
			samplingRate_Hz: rate_Hz,
			duration_s,
			seed: 7,
			channels: threePhaseChannels({
				voltage_V: 277,
				voltageHarmonics: [{ order: 5, magnitude_pctOfFundamental: 3, phase_deg: 20 }],
				current_A: 400,
				currentHarmonics: [
					{ order: 5, magnitude_pctOfFundamental: 25, phase_deg: 180 },
					{ order: 7, magnitude_pctOfFundamental: 9, phase_deg: 0 }
				],
				lag_deg: 20,
				withNeutral: true
			})
		},
		{ nominalFrequency_Hz: 60 }
	);
	return writeComtrade(
		{ ...recording, start: { local: '2026-03-10T15:05:00.250000', utcOffset_min: null } },
		{ revision: '1999', dataFormat: 'BINARY', stem }
	);
}

export function bodyOf(bytes: Uint8Array): WebReadableStream<Uint8Array> {
	return new Blob([bytes as Uint8Array<ArrayBuffer>]).stream() as unknown as WebReadableStream<Uint8Array>;
}

/** Uploads the files and hands them over; nothing is read until the worker's turn. */
export async function upload(container: Container, actor: Actor, surveyId: string, files: CaptureFile[]) {
	const ids = [];
	for (const file of files) {
		const received = await container.services.uploads.receive(actor, surveyId, file.name, bodyOf(file.bytes));
		ids.push(received.id);
	}
	return container.services.uploads.intake(actor, surveyId, ids);
}

/** What the worker does until nothing waits. */
export async function workOff(container: Container): Promise<void> {
	for (let job = await container.jobs.claim('test'); job; job = await container.jobs.claim('test'))
		await runJob(container, job, () => false);
}

/** Confirms a recognised capture as suggested; the analysis is queued. */
export async function confirmAsSuggested(
	container: Container,
	actor: Actor,
	surveyId: string,
	captureId: string
): Promise<string> {
	const { capture } = await container.services.captures.detail(actor, surveyId, captureId);
	const mapped = capture.facts.suggestions.flatMap(({ channelIndex, mapping }) =>
		mapping ? [{ channelIndex, ...mapping }] : []
	);
	return container.services.captures.confirm(actor, surveyId, captureId, {
		settings:
			capture.kind === 'waveform'
				? { kind: 'waveform', channels: mapped }
				: {
						kind: 'trend',
						columns: mapped.map(({ channelIndex, ...rest }) => ({ seriesIndex: channelIndex, ...rest }))
					},
		startedAt: new Date(capture.startedAt ?? AT)
	});
}

export async function onlyCapture(db: Db, surveyId: string): Promise<string> {
	const rows = await db('captures').where({ survey_id: surveyId }).whereNull('removed_at').select('id');
	if (rows.length !== 1) throw new Error(`expected one capture, found ${rows.length}`);
	return rows[0]!.id;
}
