import { describe, expect, it } from 'vitest';
import { handleOf } from '$lib/recording/capture-handle';
import { tablesThatBelongTogether } from '$lib/recording/readers/delimited-text/join-tables';
import {
	headingLikeness,
	APPLIED_FROM,
	OFFERED_FROM
} from '$lib/recording/readers/delimited-text/layout-likeness';
import { openDelimitedText } from '$lib/recording/readers/delimited-text/read-delimited-text';
import { loadSamples } from '$lib/recording/load-samples';
import { memoryScratch } from '$lib/recording/memory-scratch';
import type { Trend } from '$lib/recording/recording';

function file(name: string, heading: string, firstMinute: number, values: readonly string[]) {
	const rows = values.map((value, row) => {
		const at = new Date(Date.UTC(2026, 2, 2) + (firstMinute + 10 * row) * 60_000).toISOString();
		return `${at.slice(0, 16).replace('T', ' ')},${value}`;
	});
	return handleOf({ name, bytes: new TextEncoder().encode([`Start,${heading}`, ...rows].join('\n')) });
}

function joined(...files: ReturnType<typeof file>[]): Trend {
	const opened = openDelimitedText(files);
	if (!opened.ok) throw new Error(opened.problem.sentence);
	if (opened.value.kind !== 'trend') throw new Error('taken for a waveform');
	return opened.value;
}
const codes = (trend: Trend) => trend.remarks.map(({ code }) => code);

describe('several files of one log', () => {
	it('are laid end to end in the order of their clocks, and what is missing shows', () => {
		const trend = joined(
			file('b.csv', 'U_L1 rms (V)', 50, ['5', '6', '7']),
			file('a.csv', 'U_L1 rms (V)', 0, ['1', '2', '3'])
		);
		expect([...trend.intervalStarts_s]).toEqual([0, 600, 1200, 3000, 3600, 4200]);
		expect([...trend.series[0]!.values]).toEqual([1, 2, 3, 5, 6, 7]);
		expect(trend.start.local).toBe('2026-03-02T00:00:00');
		expect(codes(trend)).toEqual(['files-joined', 'files-gap']);
	});

	it('give way to the earlier file where they overlap, and say how often', () => {
		const trend = joined(
			file('a.csv', 'U_L1 rms (V)', 0, ['1', '2', '3']),
			file('b.csv', 'U_L1 rms (V)', 20, ['30', '4'])
		);
		expect([...trend.series[0]!.values]).toEqual([1, 2, 3, 4]);
		expect(trend.remarks.find(({ code }) => code === 'files-overlap')?.sentence).toContain(
			'1 intervals are told twice'
		);
	});

	it('are laid side by side where they tell other columns of the same times', () => {
		const trend = joined(
			file('u.csv', 'U_L1 rms (V)', 0, ['1', '2', '3']),
			file('i.csv', 'I_L1 rms (A)', 10, ['20', '30'])
		);
		expect(trend.series.map(({ name, values }) => [name, [...values]])).toEqual([
			['U_L1 rms (V)', [1, 2, 3]],
			['I_L1 rms (A)', [NaN, 20, 30]]
		]);
		expect(codes(trend)).toEqual(['files-joined']);
	});

	it('are told apart from other files by their headings, whatever they are called', () => {
		const table = (name: string, headings: string[], firstLocal: string | null) => ({
			name,
			headings,
			firstLocal
		});
		expect(
			tablesThatBelongTogether([
				table('x.csv', ['Time', 'U_L1 H05 [%]'], '2026-03-03T00:00:00'),
				table('notes.csv', ['Time', 'Remark'], '2026-03-02T00:00:00'),
				table('y.csv', ['time', 'u l1 h5 (%)'], '2026-03-02T00:00:00'),
				table('samples.csv', ['Time', 'U_L1 H05 [%]'], null)
			])
		).toEqual([[2, 0], [1], [3]]);
	});
});

describe('likeness of headings', () => {
	const headings = ['Time', 'U L1', 'U L2', 'U L3', 'Flag'];
	it.each([
		['the same in other signs', ['time', 'u_l1', 'U-L2', 'U L3 ', 'FLAG'], 1, 1],
		['one column of five another', ['Time', 'U L1', 'U L2', 'I N', 'Flag'], OFFERED_FROM, APPLIED_FROM],
		['the same in another order', ['Flag', 'U L3', 'U L1', 'U L2', 'Time'], OFFERED_FROM, APPLIED_FROM],
		['only the time in common', ['Time', 'P1', 'Q1', 'S1', 'PF'], 0, OFFERED_FROM]
	])('%s', (_, other, least, below) => {
		const likeness = headingLikeness(headings, other);
		expect(likeness).toBeGreaterThanOrEqual(least);
		if (below < 1) expect(likeness).toBeLessThan(below);
		else expect(likeness).toBe(1);
	});

	it('is worth an offer and no more where nothing is headed', () => {
		expect(headingLikeness(['', ''], ['', ''])).toBe(OFFERED_FROM);
		expect(headingLikeness(['', ''], ['', '', ''])).toBe(0);
		expect(OFFERED_FROM).toBeLessThan(APPLIED_FROM);
	});
});

describe('a table that is too long for memory', () => {
	const open = (text: string, inScratch: boolean) => {
		const opened = openDelimitedText(
			[handleOf({ name: 'long.csv', bytes: new TextEncoder().encode(text) })],
			{
				scratch: memoryScratch(),
				inMemory_bytes: inScratch ? 0 : Infinity
			}
		);
		if (!opened.ok) throw new Error(opened.problem.sentence);
		return opened.value;
	};

	it('gives the samples of a waveform as rows on scratch, exactly as in memory', () => {
		const text = `t (ms);U_L1 (kV);I_L1 (mA)\n${Array.from({ length: 5000 }, (_, n) => `${n / 8};${Math.sin(n / 9)};${n % 77 === 5 ? '' : n}`).join('\n')}`;
		const [long, short] = [open(text, true), open(text, false)];
		if (long.kind !== 'waveform' || short.kind !== 'waveform') throw new Error('taken for a trend');
		expect(long.samples.kind).toBe('rows');
		const { samples: _long, ...longFrame } = long;
		const { samples: _short, ...shortFrame } = short;
		expect(longFrame).toEqual(shortFrame);
		const whole = loadSamples(long);
		const same = loadSamples(short);
		for (const [index, channel] of same.channels.entries()) {
			// A factor of 1/1000 rounds once more than a division by 1000.
			channel.samples.forEach((value, n) => {
				const ours = whole.channels[index]!.samples[n] as number;
				if (Number.isNaN(value)) expect(ours).toBeNaN();
				else expect(Math.abs(ours - value)).toBeLessThanOrEqual(2.3e-16 * Math.abs(value));
			});
		}
	});

	it('fetches the columns of a log one at a time, over more than one chunk', () => {
		const text = `Start,Flagged,U_L1 rms (V),U_L1 h5 (%)\n${Array.from({ length: 9000 }, (_, n) => `${new Date(Date.UTC(2026, 2, 2) + n * 3000).toISOString().slice(0, 19)},${n % 9 === 0 ? 1 : 0},${230 + (n % 50) / 10},${n / 3000}`).join('\n')}`;
		const [long, short] = [open(text, true), open(text, false)];
		expect(long).toEqual(short);
		if (long.kind !== 'trend') throw new Error('taken for a waveform');
		expect(long.series[1]!.values[8999]).toBe(8999 / 3000);
	});

	it('is cut at line ends and characters wherever a block ends', () => {
		const rows = Array.from({ length: 60_000 }, (_, n) => `${n / 8000};${n};é`);
		const text = `t (s);U_L1 (V);Bemerkung\r\n${rows.join('\r\n')}`;
		const wide = new Uint8Array(2 + 2 * text.length);
		wide.set([0xff, 0xfe]);
		for (let at = 0; at < text.length; at++) {
			wide[2 + 2 * at] = text.charCodeAt(at) & 0xff;
			wide[3 + 2 * at] = text.charCodeAt(at) >> 8;
		}
		for (const bytes of [new TextEncoder().encode(text), wide]) {
			const opened = openDelimitedText([handleOf({ name: 'long.csv', bytes })]);
			if (!opened.ok || opened.value.kind !== 'waveform' || opened.value.samples.kind !== 'memory')
				throw new Error('not read');
			expect(opened.value.sampleCount).toBe(60_000);
			expect(opened.value.samples.channels[0]!.every((value, n) => value === n)).toBe(true);
		}
	});
});
