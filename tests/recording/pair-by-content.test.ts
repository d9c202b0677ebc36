import { describe, expect, it } from 'vitest';
import { pairByContent } from '$lib/recording/pair-by-content';
import { comtradeCapture } from '../server/captures-world';

const text = (content: string) => new TextEncoder().encode(content);
const file = (name: string, bytes: Uint8Array) => ({
	name,
	size_bytes: bytes.length,
	head: bytes.subarray(0, 16_384)
});
const [configuration, data] = comtradeCapture(0.1).map(({ bytes }) => bytes) as [Uint8Array, Uint8Array];
const names = (sets: ReturnType<typeof pairByContent>) =>
	sets.map((set) => ({ files: set.files.map(({ name }) => name), complete: set.incomplete === null }));

describe('files that make one capture', () => {
	it('are found by name where the names agree, whatever their case', () => {
		expect(names(pairByContent([file('A.DAT', data), file('a.cfg', configuration)]))).toEqual([
			{ files: ['a.cfg', 'A.DAT'], complete: true }
		]);
	});

	it('are found by content where the data file was renamed', () => {
		const lot = [file('feeder.cfg', configuration), file('export (2).dat', data)];
		expect(names(pairByContent(lot))).toEqual([{ files: ['feeder.cfg', 'export (2).dat'], complete: true }]);
	});

	it('are found by content where the configuration goes by another name', () => {
		const lot = [file('settings.txt', configuration), file('samples.bin', data)];
		expect(names(pairByContent(lot))).toEqual([{ files: ['settings.txt', 'samples.bin'], complete: true }]);
	});

	it('stay apart where two files would fit, or none does', () => {
		const two = [file('a.cfg', configuration), file('x.dat', data), file('y.dat', data)];
		expect(names(pairByContent(two)).every(({ complete }) => !complete)).toBe(true);
		const none = pairByContent([file('a.cfg', configuration), file('x.dat', data.subarray(0, 101))]);
		expect(none.map(({ incomplete }) => incomplete)).toEqual([
			'a.cfg came without its data file; add a.dat.',
			'x.dat came without its configuration; add x.cfg.'
		]);
	});

	it('pairs text data by the number of values in a row, and leaves tables alone', () => {
		const cfg = new TextDecoder().decode(configuration).replace('BINARY', 'ASCII');
		const rows = text('1,0,1,2,3,4,5,6,7\n2,130,1,2,3,4,5,6,7\n');
		const table = text('time,u1\n0,1\n1,2\n');
		expect(
			names(pairByContent([file('a.cfg', text(cfg)), file('rows.txt', rows), file('log.csv', table)]))
		).toEqual([
			{ files: ['log.csv'], complete: true },
			{ files: ['a.cfg', 'rows.txt'], complete: true }
		]);
	});
});
