import { z } from 'zod';
import { PHASES } from '../../recording/phase';

const conductor = {
	quantity: z.enum(['voltage', 'current']),
	phase: z.enum(PHASES),
	/** Factor from the recorded value to the primary one: ratio × (−1 when reversed). */
	toPrimary: z.number().refine((factor) => Number.isFinite(factor) && factor !== 0),
	/** What full scale means ("250 V"), as it was stated for samples that carry no unit; toPrimary then holds it in V or A. */
	fullScale: z.string().optional()
};

/** What the engineer confirmed about a capture; its shape follows the kind of capture. */
const captureSettings = z.discriminatedUnion('kind', [
	z.object({
		kind: z.literal('waveform'),
		channels: z.array(z.object({ channelIndex: z.number().int().min(0), ...conductor })).min(1)
	}),
	z.object({
		kind: z.literal('trend'),
		columns: z.array(z.object({ seriesIndex: z.number().int().min(0), ...conductor })).min(1)
	})
]);
export type CaptureSettings = z.infer<typeof captureSettings>;

export function parseSettings(json: string): CaptureSettings {
	return captureSettings.parse(JSON.parse(json));
}
