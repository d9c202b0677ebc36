const ADLER_MODULUS = 65_521;
/** Sums of so many bytes stay below 2^32. */
const ADLER_RUN = 3800;

/** Adler-32 (RFC 1950, 8.2). */
export function adler32(bytes: Uint8Array): number {
	let low = 1;
	let high = 0;
	for (let from = 0; from < bytes.length; from += ADLER_RUN) {
		const to = Math.min(bytes.length, from + ADLER_RUN);
		for (let at = from; at < to; at++) {
			low += bytes[at]!;
			high += low;
		}
		low %= ADLER_MODULUS;
		high %= ADLER_MODULUS;
	}
	return ((high << 16) | low) >>> 0;
}

const CRC_TABLE = Uint32Array.from({ length: 256 }, (_, index) => {
	let value = index;
	for (let bit = 0; bit < 8; bit++) value = value & 1 ? (value >>> 1) ^ 0xedb8_8320 : value >>> 1;
	return value;
});

/** CRC-32 (RFC 1952, 8). */
export function crc32(bytes: Uint8Array): number {
	let crc = 0xffff_ffff;
	for (let at = 0; at < bytes.length; at++) crc = CRC_TABLE[(crc ^ bytes[at]!) & 0xff]! ^ (crc >>> 8);
	return (crc ^ 0xffff_ffff) >>> 0;
}
