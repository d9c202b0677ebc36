import type { Readable } from 'node:stream';
import type { Actor } from '../../access/access';
import type { CalibrationFacts } from '../../register/instrument-facts';
import { AppError, requireFound } from '../app-error';
import { appendAudit } from '../audit/audit-log';
import { requirePermission } from '../auth/require-permission';
import { withTransaction } from '../db/database';
import { calibrationsRepository, type CalibrationSubject } from '../repositories/calibrations.repository';
import { instrumentsRepository } from '../repositories/instruments.repository';
import { scopeOf } from '../repositories/scope';
import { sensorsRepository } from '../repositories/sensors.repository';
import { storedFilesRepository } from '../repositories/stored-files.repository';
import type { ServiceDeps } from '../service-deps';
import { requireCertificateFile, type ReceivedFile } from './certificate-file';

export interface StoredCertificate {
	name: string;
	mediaType: string;
	size_bytes: number;
	sha256: string;
	content: Readable;
}

/** Certificates of instruments and sensors, each with the file that the laboratory sent. */
export function createCalibrationsService({ db, blobs, clock }: ServiceDeps) {
	return {
		async add(
			actor: Actor,
			subject: CalibrationSubject,
			facts: CalibrationFacts,
			file: ReceivedFile | null = null
		): Promise<void> {
			requirePermission(actor, 'register.write');
			const now = clock();
			if (facts.calibratedOn > now.toISOString().slice(0, 10))
				throw new AppError(
					'invalid',
					'The day of calibration lies in the future. Enter the day on the certificate.'
				);
			const mediaType = file === null ? null : requireCertificateFile(file);
			// Outside the transaction: a blob without a row is harmless, a row without its blob is not.
			const blob = file === null ? null : await blobs.put(file.bytes);
			await withTransaction(db, async (trx) => {
				const scope = scopeOf(actor);
				if ('instrumentId' in subject)
					requireFound(await instrumentsRepository(trx, scope).byId(subject.instrumentId), 'instrument');
				else requireFound(await sensorsRepository(trx, scope).byId(subject.sensorId), 'sensor');
				if (blob !== null && mediaType !== null)
					await storedFilesRepository(trx).record(blob, mediaType, now);
				const id = await calibrationsRepository(trx, scope).add(
					subject,
					facts,
					blob === null || file === null ? null : { sha256: blob.sha256, name: file.name },
					now.toISOString()
				);
				await appendAudit(
					trx,
					actor,
					{
						action: 'calibration.added',
						subjectKind: 'instrumentId' in subject ? 'instrument' : 'sensor',
						subjectId: 'instrumentId' in subject ? subject.instrumentId : subject.sensorId,
						detail: {
							calibrationId: id,
							...facts,
							...(blob === null ? {} : { fileSha256: blob.sha256, fileName: file?.name })
						}
					},
					now
				);
			});
		},

		/** The file of a certificate, as it was given. */
		async file(actor: Actor, calibrationId: string): Promise<StoredCertificate> {
			requirePermission(actor, 'register.read');
			const row = await calibrationsRepository(db, scopeOf(actor)).byId(calibrationId);
			const sha256 = requireFound(row?.certificate_sha256, 'certificate');
			const stored = requireFound(await db('stored_files').where({ sha256 }).first(), 'certificate');
			return {
				name: row?.certificate_file_name ?? 'certificate',
				mediaType: stored.media_type,
				size_bytes: Number(stored.size_bytes),
				sha256,
				content: blobs.openRead(sha256)
			};
		}
	};
}
