import type { CaptureHandle } from '../../capture-handle';
import { decodeText } from '../text-decoding';
import { looksLikeCff } from './cff';

/** The files of one capture by their part in it. */
export interface ComtradeFiles {
	combined: CaptureHandle | undefined;
	configuration: CaptureHandle | undefined;
	data: CaptureHandle | undefined;
	/** Files for people (HDR, INF). */
	texts: CaptureHandle[];
}

/** Bytes that tell what a file is. */
const HEAD_BYTES = 4096;

function stemOf(name: string): string {
	return name.replace(/\.[^.]*$/, '').toLowerCase();
}

function hasExtension(file: { name: string }, extension: string): boolean {
	return file.name.toLowerCase().endsWith(extension);
}

function headOfFile(file: CaptureHandle): Uint8Array {
	const head = new Uint8Array(Math.min(file.size_bytes, HEAD_BYTES));
	file.read(0, head);
	return head;
}

/** Second line "8,4A,4D": what tells a configuration from every other text. */
export function looksLikeCfg(bytes: Uint8Array): boolean {
	const { text } = decodeText(bytes.subarray(0, HEAD_BYTES));
	const second = text.split(/\r\n|\n|\r/).filter((line) => line.trim() !== '')[1] ?? '';
	return /^\s*\d+\s*,\s*\d+\s*[AD]\s*,\s*\d+\s*[AD]\b/i.test(second);
}

/** Content decides; a name only where content cannot. Null where nothing looks like a configuration. */
export function sortComtradeFiles(files: readonly CaptureHandle[]): ComtradeFiles | null {
	const heads = new Map(files.map((file) => [file, headOfFile(file)]));
	const combined =
		files.find((file) => looksLikeCff(heads.get(file)!)) ?? files.find((file) => hasExtension(file, '.cff'));
	const configuration =
		files.find((file) => hasExtension(file, '.cfg')) ?? files.find((file) => looksLikeCfg(heads.get(file)!));
	if (combined === undefined && configuration === undefined) return null;
	return {
		combined,
		configuration,
		data: configuration && dataFileFor(configuration, files),
		texts: files.filter((file) => hasExtension(file, '.hdr') || hasExtension(file, '.inf'))
	};
}

function dataFileFor(
	configuration: CaptureHandle,
	files: readonly CaptureHandle[]
): CaptureHandle | undefined {
	const others = files.filter((file) => file !== configuration && !/\.(hdr|inf|cfg)$/i.test(file.name));
	const sameStem = others.filter((file) => stemOf(file.name) === stemOf(configuration.name));
	return (
		sameStem.find((file) => hasExtension(file, '.dat')) ??
		sameStem[0] ??
		others.find((file) => hasExtension(file, '.dat')) ??
		others[0]
	);
}
