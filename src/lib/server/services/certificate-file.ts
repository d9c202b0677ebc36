import { AppError } from '../app-error';

/** A scanned certificate of several pages fits; a video does not. */
export const LARGEST_CERTIFICATE_BYTES = 15 * 1024 * 1024;

/** What comes with a certificate, as the form sent it. */
export interface ReceivedFile {
	name: string;
	bytes: Uint8Array;
}

const KINDS = [
	{ mediaType: 'application/pdf', start: [0x25, 0x50, 0x44, 0x46, 0x2d] },
	{ mediaType: 'image/png', start: [0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a] },
	{ mediaType: 'image/jpeg', start: [0xff, 0xd8, 0xff] }
] as const;
export type CertificateMediaType = (typeof KINDS)[number]['mediaType'];

/** What the bytes are, whatever the name says; null for anything but PDF, PNG and JPEG. */
export function certificateMediaType(bytes: Uint8Array): CertificateMediaType | null {
	return KINDS.find(({ start }) => start.every((byte, i) => bytes[i] === byte))?.mediaType ?? null;
}

/** The kind of a file that may be kept with a certificate. Throws `invalid` with a sentence that says what to do. */
export function requireCertificateFile({ name, bytes }: ReceivedFile): CertificateMediaType {
	if (bytes.byteLength > LARGEST_CERTIFICATE_BYTES)
		throw new AppError(
			'invalid',
			`“${name}” is larger than ${LARGEST_CERTIFICATE_BYTES / 1024 / 1024} MB. Scan it at a lower resolution and choose it again.`
		);
	const mediaType = certificateMediaType(bytes);
	if (mediaType === null)
		throw new AppError(
			'invalid',
			`“${name}” is neither a PDF nor a PNG or JPEG image. Choose the certificate as one of these.`
		);
	return mediaType;
}
