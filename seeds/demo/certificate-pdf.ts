import { renderPdf } from '../../src/lib/server/pdf/render';

export interface DemoCertificate {
	certificate: string;
	what: string;
	serialNumber: string;
	calibratedOn: string;
	dueOn: string;
	/** Instant that the file says it was made at. */
	madeAt: Date;
}

/** A page that looks like a certificate and says of itself that it is none. */
export async function certificatePdf(one: DemoCertificate): Promise<Uint8Array> {
	const line = (term: string, value: string) => [{ text: term, color: '#4B5766' }, { text: value }];
	const { bytes } = await renderPdf(() => ({
		definition: {
			info: { title: `Certificate ${one.certificate} (invented example)`, creationDate: one.madeAt },
			pageSize: 'A5',
			pageMargins: [36, 40, 36, 40],
			defaultStyle: { font: 'IBM Plex Sans', fontSize: 10, color: '#17202B' },
			content: [
				{
					text: 'INVENTED EXAMPLE. This is no calibration certificate.',
					color: '#A5231C',
					bold: true,
					margin: [0, 0, 0, 14]
				},
				{ text: `Certificate ${one.certificate}`, fontSize: 18, bold: true },
				{ text: 'Calder Metrology (invented)', margin: [0, 2, 0, 16] },
				{
					layout: 'lightHorizontalLines',
					table: {
						widths: [110, '*'],
						body: [
							line('Calibrated item', one.what),
							line('Serial number', one.serialNumber),
							line('Calibrated on', one.calibratedOn),
							line('Next due', one.dueOn),
							line('Result', 'within its class at all points (invented)')
						]
					}
				}
			]
		},
		pageCount: () => 1
	}));
	return bytes;
}
