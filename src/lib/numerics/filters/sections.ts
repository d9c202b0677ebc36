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
 * Bilinear transform of a section; of first order (b2 = a2 = 0) where the analogue one is.
 * rate_Hz   sampling rate
 * match_Hz  frequency at which the response of both is the same; 0 for the transform without prewarping
 * source    common practice
 */
export function bilinear(section: AnalogueSection, rate_Hz: number, match_Hz: number): Section {
	const c = match_Hz > 0 ? (2 * Math.PI * match_Hz) / Math.tan((Math.PI * match_Hz) / rate_Hz) : 2 * rate_Hz;
	const { n0, n1, n2, d0, d1, d2 } = section;
	// As a second-order section it would carry a pole at half the rate that never dies, and a zero upon it.
	if (n2 === 0 && d2 === 0) {
		const norm = d0 + d1 * c;
		return { b0: (n0 + n1 * c) / norm, b1: (n0 - n1 * c) / norm, b2: 0, a1: (d0 - d1 * c) / norm, a2: 0 };
	}
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

/** Two first-order sections (b2 = a2 = 0) in a row as one section of second order. */
export function joinFirstOrder(one: Section, other: Section): Section {
	return {
		b0: one.b0 * other.b0,
		b1: one.b0 * other.b1 + one.b1 * other.b0,
		b2: one.b1 * other.b1,
		a1: one.a1 + other.a1,
		a2: one.a1 * other.a1
	};
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

const PASS_THROUGH: Section = { b0: 1, b1: 0, b2: 0, a1: 0, a2: 0 };
const COEFFICIENTS = 5;

/**
 * Runs sections in a row over samples (transposed direct form); keeps its state between calls, so that the result does not
 * depend on how the samples are cut into calls. Two sections share a loop: each waits for its own last value, and the
 * processor works on the other meanwhile.
 */
export class SectionCascade {
	/** [sections × 5] b0, b1, b2, a1, a2 */
	private readonly coefficients: Float64Array;
	/** [sections × 2] the two stored values of each section. */
	private readonly state: Float64Array;

	constructor(sections: readonly Section[]) {
		const even = sections.length % 2 === 0 ? sections : [...sections, PASS_THROUGH];
		this.coefficients = Float64Array.from(even.flatMap(({ b0, b1, b2, a1, a2 }) => [b0, b1, b2, a1, a2]));
		this.state = new Float64Array(2 * even.length);
	}

	/** Filters values[0 … count−1] in place. */
	run(values: Float64Array, count: number): void {
		const { state } = this;
		for (let s = 0; 2 * s < state.length; s += 2) {
			const [b0, b1, b2, a1, a2] = this.sectionAt(s);
			const [d0, d1, d2, c1, c2] = this.sectionAt(s + 1);
			let y1 = state[2 * s]!;
			let y2 = state[2 * s + 1]!;
			let z1 = state[2 * s + 2]!;
			let z2 = state[2 * s + 3]!;
			for (let i = 0; i < count; i++) {
				const x = values[i]!;
				const y = b0 * x + y1;
				y1 = b1 * x - a1 * y + y2;
				y2 = b2 * x - a2 * y;
				const z = d0 * y + z1;
				z1 = d1 * y - c1 * z + z2;
				z2 = d2 * y - c2 * z;
				values[i] = z;
			}
			state[2 * s] = y1;
			state[2 * s + 1] = y2;
			state[2 * s + 2] = z1;
			state[2 * s + 3] = z2;
		}
	}

	/** Forgets everything, as if nothing had ever come. */
	reset(): void {
		this.state.fill(0);
	}

	private sectionAt(index: number): readonly [number, number, number, number, number] {
		const at = COEFFICIENTS * index;
		const { coefficients } = this;
		return [
			coefficients[at]!,
			coefficients[at + 1]!,
			coefficients[at + 2]!,
			coefficients[at + 3]!,
			coefficients[at + 4]!
		];
	}
}
