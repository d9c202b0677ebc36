import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';
import { groupCaptureFiles } from '$lib/recording/group-capture-files';
import { readCapture } from '$lib/recording/read-capture';
import { captureFixtures, WAV_FULL_SCALE } from '$lib/synthesis/capture-fixtures';

const folder = fileURLToPath(new URL('../../fixtures/captures/', import.meta.url));
const onDisk = (name: string) => new Uint8Array(readFileSync(join(folder, name)));

describe('the captures kept as fixtures', () => {
	it('are byte for byte what their script makes', () => {
		for (const { name, bytes } of captureFixtures())
			expect(Buffer.compare(onDisk(name), bytes), name).toBe(0);
	});

	const groups = groupCaptureFiles(
		readdirSync(folder).filter((name) => /\.(cfg|dat|cff|csv)$/.test(name) && !name.includes('status'))
	);

	it.each(groups.map((group) => [group.join(' + '), group] as const))(
		'%s is read without remark',
		(_, group) => {
			const result = readCapture(group.map((name) => ({ name, bytes: onDisk(name) })));
			if (!result.ok) throw new Error(result.problem.sentence);
			expect(result.value.remarks).toEqual([]);
			if (result.value.kind === 'trend') {
				expect(result.value.intervalStarts_s.length).toBe(144);
				return;
			}
			expect(result.value.segments).toEqual([{ samplingRate_Hz: 3840, fromSample: 0, toSample: 768 }]);
			expect(result.value.channels.map(({ name, phaseHint }) => `${name} ${phaseHint}`)).toEqual([
				'VA L1',
				'VB L2',
				'VC L3',
				'IA L1',
				'IB L2',
				'IC L3'
			]);
			for (const { quantity, samples } of result.value.channels) {
				const orders = quantity === 'voltage' ? [3, 2, 1] : [28, 10, 7, 4];
				const peak = quantity === 'voltage' ? 391.9 : 480;
				// rms of a sum of sines over whole cycles: √(Σ amplitude² ÷ 2).
				const truth = (peak / Math.SQRT2) * Math.sqrt(1 + orders.reduce((sum, p) => sum + (p / 100) ** 2, 0));
				const rms = Math.sqrt(samples.reduce((sum, x) => sum + x * x, 0) / samples.length);
				// 16 bits over ± the largest sample: rms error of a step ÷ √12, far below 1e-5 of the value.
				expect(Math.abs(rms / truth - 1)).toBeLessThan(1e-5);
			}
		}
	);

	const readOne = (name: string) => {
		const result = readCapture([{ name, bytes: onDisk(name) }]);
		if (!result.ok || result.value.kind !== 'waveform') throw new Error('not read');
		return result.value;
	};

	it('four-wire-24-bit.wav holds the samples of the others as parts of full scale', () => {
		const wave = readOne('four-wire-24-bit.wav');
		const reference = readOne('four-wire-2013-float32.cff');
		expect(wave.start?.local).toBe('2024-03-05T10:20:30.000000');
		for (const [c, channel] of reference.channels.entries()) {
			const fullScale = channel.quantity === 'voltage' ? WAV_FULL_SCALE.voltage_V : WAV_FULL_SCALE.current_A;
			for (const [i, value] of channel.samples.entries())
				// Half a step of 24 bits, and the rounding of the single-precision reference.
				expect(Math.abs(wave.channels[c]!.samples[i]! * fullScale - value)).toBeLessThan(
					fullScale * 2 ** -23
				);
		}
	});

	it('four-wire-2013-status.cff tells its switching, its notes and its clock', () => {
		const recording = readOne('four-wire-2013-status.cff');
		expect(recording.statusActivity?.map(({ changeCount }) => changeCount)).toEqual([0, 1]);
		expect(recording.notes?.[0]?.text).toContain('switched in after 0.1 s');
		expect(recording.remarks.map(({ sentence }) => sentence)).toEqual([
			'four-wire-2013-status.cff, line 20: the recorder’s clock had lost its time source and was within 100 µs of it (quality 6).',
			'four-wire-2013-status.cff: of 2 status channels one changed: Capacitor step 2 once after 0.1 s (sample 385, to 1).'
		]);
	});
});
