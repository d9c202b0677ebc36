import fc from 'fast-check';
import { expect, it } from 'vitest';
import { decodeTile, encodeTile, type Tile } from '$lib/recording/pyramid/tile-codec';

const floats = (count: number) =>
	fc
		.array(fc.oneof(fc.float(), fc.constant(NaN)), { minLength: count, maxLength: count })
		.map((values) => Float32Array.from(values));

const tile: fc.Arbitrary<Tile> = fc
	.record({
		level: fc.integer({ min: 0, max: 6 }),
		entries: fc.integer({ min: 1, max: 40 }),
		channelIndexes: fc.uniqueArray(fc.integer({ min: 0, max: 500 }), { maxLength: 5 }),
		firstEntry: fc.integer({ min: 0, max: 2 ** 40 }),
		isStamped: fc.boolean()
	})
	.chain(({ level, entries, channelIndexes, firstEntry, isStamped }) =>
		fc.tuple(...channelIndexes.map(() => fc.tuple(floats(entries), floats(entries)))).map((values) => ({
			level,
			entries,
			firstEntry,
			starts_s: isStamped ? Float64Array.from({ length: entries }, (_, i) => i / 7) : null,
			channels: channelIndexes.map((channelIndex, c) => {
				const [least, greatest] = values[c]!;
				return { channelIndex, least, greatest: level === 0 ? least : greatest };
			})
		}))
	);

it('gives back what was sent, bit for bit', () => {
	fc.assert(
		fc.property(tile, (sent) => {
			expect(decodeTile(encodeTile(sent).buffer)).toEqual(sent);
		})
	);
});

it('refuses bytes that are cut short or something else', () => {
	const sent = encodeTile({
		level: 1,
		firstEntry: 0,
		entries: 2,
		starts_s: null,
		channels: [{ channelIndex: 0, least: Float32Array.of(1, 2), greatest: Float32Array.of(3, 4) }]
	});
	expect(() => decodeTile(sent.slice(0, sent.length - 4).buffer)).toThrow('length');
	expect(() => decodeTile(sent.slice(0, 10).buffer)).toThrow('short');
	expect(() =>
		decodeTile(new TextEncoder().encode('<html><body>signed out of here</body></html>').buffer)
	).toThrow('no tile');
});
