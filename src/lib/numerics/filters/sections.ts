/** A filter section y = (b0 + b1·z⁻¹ + b2·z⁻²)/(1 + a1·z⁻¹ + a2·z⁻²)·x. */
export interface Section {
	b0: number;
	b1: number;
	b2: number;
	a1: number;
	a2: number;
}

/** An analogue section (n0 + n1·s + n2·s²)/(d0 + d1·s + d2·s²), s in rad/s. */
export interface AnalogueSection {
	n0: number;
	n1: number;
	n2: number;
	d0: number;
	d1: number;
	d2: number;
}

/**
 * Bilinear transform of a section.
 * rate_Hz   sampling rate
 * match_Hz  frequency at which the response of both is the same; 0 for the transform without prewarping
 * source    common practice
 */
export function bilinear(section: AnalogueSection, rate_Hz: number, match_Hz: number): Section {
	const c = match_Hz > 0 ? (2 * Math.PI * match_Hz) / Math.tan((Math.PI * match_Hz) / rate_Hz) : 2 * rate_Hz;
	const { n0, n1, n2, d0, d1, d2 } = section;
	const norm = d0 + d1 * c + d2 * c * c;
	return {
		b0: (n0 + n1 * c + n2 * c * c) / norm,
		b1: (2 * n0 - 2 * n2 * c * c) / norm,
		b2: (n0 - n1 * c + n2 * c * c) / norm,
		a1: (2 * d0 - 2 * d2 * c * c) / norm,
		a2: (d0 - d1 * c + d2 * c * c) / norm
	};
}

/** The analogue Butterworth low-pass of even order as sections, corner at −3 dB. */
export function butterworthLowPass(order: number, corner_Hz: number): AnalogueSection[] {
	const w = 2 * Math.PI * corner_Hz;
	return Array.from({ length: order / 2 }, (_, i) => {
		const damping = Math.sin((Math.PI * (2 * i + 1)) / (2 * order));
		return { n0: w * w, n1: 0, n2: 0, d0: w * w, d1: 2 * damping * w, d2: 1 };
	});
}

/** Magnitude of the response of sections in a row at one frequency. */
export function responseMagnitude(
	sections: readonly Section[],
	rate_Hz: number,
	frequency_Hz: number
): number {
	const turn = (2 * Math.PI * frequency_Hz) / rate_Hz;
	let magnitude = 1;
	for (const { b0, b1, b2, a1, a2 } of sections) {
		const c1 = Math.cos(turn);
		const s1 = Math.sin(turn);
		const c2 = Math.cos(2 * turn);
		const s2 = Math.sin(2 * turn);
		const top = Math.hypot(b0 + b1 * c1 + b2 * c2, b1 * s1 + b2 * s2);
		const bottom = Math.hypot(1 + a1 * c1 + a2 * c2, a1 * s1 + a2 * s2);
		magnitude *= top / bottom;
	}
	return magnitude;
}

/** Runs sections in a row over samples; keeps its state between calls. */
export class SectionCascade {
	/** Per section the two stored values of the transposed direct form. */
	private readonly state: Float64Array;

	constructor(private readonly sections: readonly Section[]) {
		this.state = new Float64Array(2 * sections.length);
	}

	/** Filters values[0 … count−1] in place. */
	run(values: Float64Array, count: number): void {
		const { sections, state } = this;
		for (let s = 0; s < sections.length; s++) {
			const { b0, b1, b2, a1, a2 } = sections[s]!;
			let z1 = state[2 * s]!;
			let z2 = state[2 * s + 1]!;
			for (let i = 0; i < count; i++) {
				const x = values[i]!;
				const y = b0 * x + z1;
				z1 = b1 * x - a1 * y + z2;
				z2 = b2 * x - a2 * y;
				values[i] = y;
			}
			state[2 * s] = z1;
			state[2 * s + 1] = z2;
		}
	}

	/** Forgets everything, as if nothing had ever come. */
	reset(): void {
		this.state.fill(0);
	}
}
