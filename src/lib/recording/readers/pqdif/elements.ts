import { DAYS_TO_1970, ELEMENT, PHYSICAL_TYPE, TYPE_BYTES } from './pqdif-ids';

/** Bytes of one record's body, unpacked. Offsets of elements count from its first byte. */
export interface Body {
	bytes: Uint8Array;
	view: DataView;
	/** Entries that may still be read: collections that lead into each other must come to an end. */
	entriesLeft: number;
}

/** One entry of a collection. */
export interface Element {
	tag: string;
	/** Collection, scalar or vector. */
	kind: number;
	type: number;
	/** Where its value begins in the body. */
	at: number;
}

export type Collection = readonly Element[];

const ENTRY_BYTES = 28;
const SECONDS_PER_DAY = 86_400;
/** Well above what a record of tens of thousands of series needs. */
const MOST_ENTRIES = 2_000_000;

export function bodyOf(bytes: Uint8Array): Body {
	return {
		bytes,
		view: new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength),
		entriesLeft: Math.min(MOST_ENTRIES, 64 + Math.floor((2 * bytes.length) / ENTRY_BYTES))
	};
}

const HEX = Array.from({ length: 256 }, (_, value) => value.toString(16).toUpperCase().padStart(2, '0'));
/** The first three fields of an identifier lie with their lowest byte first. */
const GUID_ORDER = [3, 2, 1, 0, 5, 4, 7, 6, 8, 9, 10, 11, 12, 13, 14, 15];

/** The identifier at a place, as `pqdif-ids.ts` writes them; the place must be inside. */
export function guidAt(bytes: Uint8Array, at: number): string {
	let text = '';
	for (const place of GUID_ORDER) text += HEX[bytes[at + place]!];
	return text;
}

/** The entries of a collection; null where it does not lie in the body or too many were read. */
export function collectionAt(body: Body, at: number): Collection | null {
	if (at < 0 || at + 4 > body.bytes.length) return null;
	const count = body.view.getInt32(at, true);
	if (count < 0 || at + 4 + count * ENTRY_BYTES > body.bytes.length || count > body.entriesLeft) return null;
	body.entriesLeft -= count;
	return Array.from({ length: count }, (_, index): Element => {
		const entry = at + 4 + index * ENTRY_BYTES;
		const isEmbedded = body.bytes[entry + 18] !== 0;
		const kind = body.bytes[entry + 16]!;
		return {
			tag: guidAt(body.bytes, entry),
			kind,
			type: body.bytes[entry + 17]!,
			at: isEmbedded && kind === ELEMENT.scalar ? entry + 20 : body.view.getInt32(entry + 20, true)
		};
	});
}

export function find(collection: Collection, tag: string): Element | undefined {
	return collection.find((element) => element.tag === tag);
}

/** The collection that an entry leads to; null where there is none or it is damaged. */
export function childOf(body: Body, collection: Collection, tag: string): Collection | null {
	const element = find(collection, tag);
	return element?.kind === ELEMENT.collection ? collectionAt(body, element.at) : null;
}

/** All collections of one tag, in order; null where one of them is damaged, so that places keep their numbers. */
export function childrenOf(body: Body, collection: Collection, tag: string): (Collection | null)[] {
	return collection
		.filter((element) => element.tag === tag && element.kind === ELEMENT.collection)
		.map((element) => collectionAt(body, element.at));
}

function scalarPlace(body: Body, element: Element | undefined): number | null {
	if (element?.kind !== ELEMENT.scalar) return null;
	const bytes = TYPE_BYTES[element.type];
	if (bytes === undefined || element.at < 0 || element.at + bytes > body.bytes.length) return null;
	return element.at;
}

/** A scalar as a number: truth values 0 or 1, time stamps in seconds since 1970, complex values by magnitude. */
export function numberOf(body: Body, collection: Collection, tag: string): number | null {
	const element = find(collection, tag);
	const at = scalarPlace(body, element);
	return at === null || element === undefined ? null : numberAt(body.view, element.type, at);
}

export function guidOf(body: Body, collection: Collection, tag: string): string | null {
	const element = find(collection, tag);
	const at = scalarPlace(body, element);
	return at === null || element?.type !== PHYSICAL_TYPE.guid ? null : guidAt(body.bytes, at);
}

/** A moment: whole seconds since 1970-01-01 UTC and the rest, which keeps nanoseconds that one double would lose. */
export interface Moment {
	whole_s: number;
	fraction_s: number;
}

export function momentOf(body: Body, collection: Collection, tag: string): Moment | null {
	const element = find(collection, tag);
	const at = scalarPlace(body, element);
	if (at === null || element?.type !== PHYSICAL_TYPE.timestamp) return null;
	const ofDay_s = body.view.getFloat64(at + 4, true);
	if (!(ofDay_s >= 0 && ofDay_s <= SECONDS_PER_DAY)) return null;
	const days = body.view.getUint32(at, true) - DAYS_TO_1970;
	const whole = Math.floor(ofDay_s);
	return { whole_s: days * SECONDS_PER_DAY + whole, fraction_s: ofDay_s - whole };
}

/** Values of a vector that lie whole in the body. */
export interface VectorPlace {
	type: number;
	count: number;
	at: number;
}

export function vectorOf(body: Body, collection: Collection, tag: string): VectorPlace | null {
	const element = find(collection, tag);
	if (element?.kind !== ELEMENT.vector || element.at < 0 || element.at + 4 > body.bytes.length) return null;
	const bytes = TYPE_BYTES[element.type];
	const count = body.view.getInt32(element.at, true);
	const at = element.at + 4;
	if (bytes === undefined || count < 0 || at + count * bytes > body.bytes.length) return null;
	return { type: element.type, count, at };
}

/** Text up to its first zero; empty where there is none. */
export function textOf(body: Body, collection: Collection, tag: string): string {
	const vector = vectorOf(body, collection, tag);
	if (vector === null) return '';
	const bytes = body.bytes.subarray(vector.at, vector.at + vector.count * TYPE_BYTES[vector.type]!);
	if (vector.type === PHYSICAL_TYPE.char2) return upToZero(new TextDecoder('utf-16le').decode(bytes));
	if (vector.type !== PHYSICAL_TYPE.char1) return '';
	const text = new TextDecoder('utf-8').decode(bytes);
	return upToZero(text.includes('\uFFFD') ? new TextDecoder('windows-1252').decode(bytes) : text);
}

function upToZero(text: string): string {
	const end = text.indexOf('\u0000');
	return (end < 0 ? text : text.slice(0, end)).trim();
}

/** One value of a physical type; NaN for identifiers and types that are no numbers. */
export function numberAt(view: DataView, type: number, at: number): number {
	switch (type) {
		case PHYSICAL_TYPE.boolean1:
			return view.getUint8(at) === 0 ? 0 : 1;
		case PHYSICAL_TYPE.boolean2:
			return view.getUint16(at, true) === 0 ? 0 : 1;
		case PHYSICAL_TYPE.boolean4:
			return view.getUint32(at, true) === 0 ? 0 : 1;
		case PHYSICAL_TYPE.int1:
			return view.getInt8(at);
		case PHYSICAL_TYPE.int2:
			return view.getInt16(at, true);
		case PHYSICAL_TYPE.int4:
			return view.getInt32(at, true);
		case PHYSICAL_TYPE.char1:
		case PHYSICAL_TYPE.uint1:
			return view.getUint8(at);
		case PHYSICAL_TYPE.char2:
		case PHYSICAL_TYPE.uint2:
			return view.getUint16(at, true);
		case PHYSICAL_TYPE.uint4:
			return view.getUint32(at, true);
		case PHYSICAL_TYPE.real4:
			return view.getFloat32(at, true);
		case PHYSICAL_TYPE.real8:
			return view.getFloat64(at, true);
		case PHYSICAL_TYPE.complex8:
			return Math.hypot(view.getFloat32(at, true), view.getFloat32(at + 4, true));
		case PHYSICAL_TYPE.complex16:
			return Math.hypot(view.getFloat64(at, true), view.getFloat64(at + 8, true));
		case PHYSICAL_TYPE.timestamp:
			return (view.getUint32(at, true) - DAYS_TO_1970) * SECONDS_PER_DAY + view.getFloat64(at + 4, true);
		default:
			return NaN;
	}
}
