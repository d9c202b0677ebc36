/** A serial number shorter than this turns up by chance. */
const SHORTEST_SERIAL = 4;

const plain = (text: string): string => text.toLowerCase().replace(/[^\p{L}\p{N}]/gu, '');

/**
 * The instrument that a file names as its recorder: by its serial number, or else by its name.
 * texts    what the file says of its recorder and station
 * returns  null where nothing fits, or more than one does
 */
export function recorderOf<I extends { name: string; serialNumber: string }>(
	texts: readonly string[],
	instruments: readonly I[]
): I | null {
	const said = texts.map(plain).filter((text) => text !== '');
	const bySerial = instruments.filter(({ serialNumber }) => {
		const serial = plain(serialNumber);
		return serial.length >= SHORTEST_SERIAL && said.some((text) => text.includes(serial));
	});
	const byName = instruments.filter(({ name }) => said.includes(plain(name)));
	const found = bySerial.length > 0 ? bySerial : byName;
	return found.length === 1 ? (found[0] ?? null) : null;
}
