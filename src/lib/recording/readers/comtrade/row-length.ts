import { decodeText } from '../text-decoding';
import { binaryRowBytes } from './dat-binary';
import { parseCfg } from './parse-cfg';

/** How long one row of the data is that a configuration describes. */
export type RowLength = { kind: 'binary'; bytes: number } | { kind: 'text'; fields: number };

/** Null where the bytes are no configuration that can be read. */
export function rowLengthOf(configuration: Uint8Array): RowLength | null {
	const header = parseCfg('', decodeText(configuration).text, 1);
	if (!header.ok) return null;
	const { dataFormat, analogues, statuses } = header.value;
	if (dataFormat === 'ASCII') return { kind: 'text', fields: 2 + analogues.length + statuses.length };
	return { kind: 'binary', bytes: binaryRowBytes(dataFormat, analogues.length, statuses.length) };
}
