import type { Actor } from '../../access/access';
import { suggestChannels } from '../../recording/channel-suggestion';
import {
	calibrationValidityDuring,
	type CalibrationValidity,
	type CertificateSpan
} from '../../register/calibration-validity';
import { requireFound } from '../app-error';
import { appendAudit } from '../audit/audit-log';
import { requirePermission } from '../auth/require-permission';
import { withTransaction } from '../db/database';
import { captureSurvey, type StoredFacts } from '../read-models/capture-list';
import { measuringInstrument } from '../read-models/measuring-instrument';
import { calibrationsRepository, toCertificateSpan } from '../repositories/calibrations.repository';
import { capturesRepository } from '../repositories/captures.repository';
import { instrumentsRepository } from '../repositories/instruments.repository';
import { scopeOf } from '../repositories/scope';
import { surveysRepository } from '../repositories/surveys.repository';
import type { ServiceDeps } from '../service-deps';
import { queueReassessment } from './assessments/queue-reassessment';

interface NamedInstrument {
	id: string;
	name: string;
	serialNumber: string;
}

/** What recorded a capture, what else could have, and whether its calibration counted then. */
export interface CaptureInstrument {
	/** Named for this capture; null = the survey's. */
	ownId: string | null;
	/** Own or the survey's; null = neither is known. */
	instrument: NamedInstrument | null;
	surveyInstrument: NamedInstrument | null;
	choices: NamedInstrument[];
	/** Null where the start or the instrument is not known. */
	calibration: CalibrationValidity<CertificateSpan> | null;
}

const named = (row: { id: string; name: string; serial_number: string }): NamedInstrument => ({
	id: row.id,
	name: row.name,
	serialNumber: row.serial_number
});

/** Which instrument recorded a capture: the survey's, unless the capture names another. */
export function createCaptureInstrumentService({ db, clock, jobs }: ServiceDeps) {
	return {
		async of(actor: Actor, surveyId: string, captureId: string): Promise<CaptureInstrument> {
			requirePermission(actor, 'capture.read');
			const scope = scopeOf(actor);
			const capture = await capturesRepository(db, scope).byId(captureId);
			if (capture?.survey_id !== surveyId) return requireFound<never>(null, 'capture');
			const survey = requireFound(await surveysRepository(db, scope).byId(surveyId), 'survey');
			const point = requireFound(await captureSurvey(db, scope, surveyId), 'survey');
			const instruments = instrumentsRepository(db, scope);
			const byId = async (id: string | null) => (id === null ? null : ((await instruments.byId(id)) ?? null));
			const surveys = await byId(survey.instrument_id);
			const own = await byId(capture.instrument_id);
			const instrument = own ?? surveys;
			const inUse = await instruments.inUse();
			// One that was put away since stays on the list of the capture that it recorded.
			const choices = own !== null && !inUse.some((row) => row.id === own.id) ? [...inUse, own] : inUse;
			const certificates =
				instrument === null ? [] : await calibrationsRepository(db, scope).ofInstruments([instrument.id]);
			return {
				ownId: own?.id ?? null,
				instrument: instrument && named(instrument),
				surveyInstrument: surveys && named(surveys),
				choices: choices.map(named),
				calibration:
					instrument === null || capture.started_at === null
						? null
						: calibrationValidityDuring(
								certificates.map(toCertificateSpan),
								{ start_ms: Date.parse(capture.started_at), duration_s: capture.duration_s },
								point.timeZone
							)
			};
		},

		/**
		 * Names the instrument of a capture (null = the survey's). The suggestions are made anew with its sensors; what
		 * was confirmed stays, and a verdict that rests on the capture is made anew.
		 */
		async choose(
			actor: Actor,
			surveyId: string,
			captureId: string,
			instrumentId: string | null
		): Promise<void> {
			requirePermission(actor, 'capture.write');
			const scope = scopeOf(actor);
			await withTransaction(db, async (trx) => {
				const captures = capturesRepository(trx, scope);
				const capture = await captures.byId(captureId);
				if (capture?.survey_id !== surveyId) return requireFound<never>(null, 'capture');
				const survey = requireFound(await surveysRepository(trx, scope).byId(surveyId), 'survey');
				const point = requireFound(await captureSurvey(trx, scope, surveyId), 'survey');
				if (instrumentId !== null)
					requireFound(await instrumentsRepository(trx, scope).byId(instrumentId), 'instrument');
				const now = clock();
				const facts = JSON.parse(capture.facts_json) as StoredFacts;
				const instrument = await measuringInstrument(trx, scope, instrumentId ?? survey.instrument_id);
				const suggested =
					capture.kind === 'waveform'
						? {
								...facts,
								suggestions: suggestChannels(
									facts.channels.map((channel, index) => ({ ...channel, index })),
									facts.format,
									point.facts,
									instrument
								)
							}
						: facts;
				await captures.update(
					captureId,
					{ instrument_id: instrumentId, facts_json: JSON.stringify(suggested) },
					now
				);
				await queueReassessment(trx, jobs, actor.practiceId, { surveyId });
				await appendAudit(
					trx,
					actor,
					{
						action: 'capture.instrument-named',
						subjectKind: 'capture',
						subjectId: captureId,
						detail: { instrumentId, instrumentIdBefore: capture.instrument_id }
					},
					now
				);
			});
		}
	};
}
