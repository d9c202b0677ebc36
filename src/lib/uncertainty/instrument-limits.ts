import type { CertificateBand, InstrumentClass, MeasuringChain, Quantity } from './measuring-chain';

/**
 * Greatest permitted error of a harmonic: a share of the reading, or the floor for small readings. The two meet at the
 * threshold (1 % and 3 % of nominal in class I, 3 % and 10 % in class II).
 * source  IEC 61000-4-7:2002+A1:2008, table 1 (from memory)
 */
const CLASS_LIMITS: Record<
	InstrumentClass,
	{ reading_pct: number; floor_pctOfNominal: Record<Quantity, number> }
> = {
	I: { reading_pct: 5, floor_pctOfNominal: { voltage: 0.05, current: 0.15 } },
	II: { reading_pct: 5, floor_pctOfNominal: { voltage: 0.15, current: 0.5 } }
};

/** Greatest permitted error of the fundamental: IEC 61000-4-30:2015, 5.2.2, classes A and S (from memory). */
export const FUNDAMENTAL_LIMIT_PCT: Record<InstrumentClass, number> = { I: 0.1, II: 0.5 };

/**
 * Bound of the recorder's error, in the unit of `level`.
 * level    reading, in percent of the basis
 * floor    what one percent of the nominal value (voltage) or of the range (current) is, same unit; null = not known
 */
export function classLimit(
	instrumentClass: InstrumentClass,
	quantity: Quantity,
	level: number,
	onePercentOfNominal: number | null
): number {
	const { reading_pct, floor_pctOfNominal } = CLASS_LIMITS[instrumentClass];
	const ofReading = (reading_pct / 100) * level;
	return onePercentOfNominal === null
		? ofReading
		: Math.max(ofReading, floor_pctOfNominal[quantity] * onePercentOfNominal);
}

/** The band of the certificate that holds for an order; the first one where several do. */
export function certificateBand(
	chain: MeasuringChain,
	quantity: Quantity,
	order: number
): CertificateBand | null {
	return (
		chain.certificate.find(
			(band) => band.quantity === quantity && order >= band.fromOrder && order <= band.toOrder
		) ?? null
	);
}
