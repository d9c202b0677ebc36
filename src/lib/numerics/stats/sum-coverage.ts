/** One of the independent, symmetric random variables of a sum; each has mean 0 and the standard deviation or scale `u`. */
export type SumPart =
	| { shape: 'normal' | 'rectangular' | 'triangular'; u: number }
	/** Student's t with these degrees of freedom (≥ 1), scaled by u. */
	| { shape: 'student'; u: number; degreesOfFreedom: number };

/** Terms of the series; the slowest sum, a lone rectangle, is then right to 1e-4. */
const TERMS = 4000;
/** Once a characteristic function that only falls is below this, no further term changes anything. */
const NEGLIGIBLE = 1e-12;
/** Nodes over the spread of a sample variance. */
const VARIANCE_NODES = 160;

function sinc(x: number): number {
	return Math.abs(x) < 1e-6 ? 1 - (x * x) / 6 : Math.sin(x) / x;
}

/** Half-width beyond which a part has no weight that counts. */
function reachOf(part: SumPart): number {
	switch (part.shape) {
		case 'rectangular':
			return part.u * Math.sqrt(3);
		case 'triangular':
			return part.u * Math.sqrt(6);
		case 'normal':
			return 8 * part.u;
		case 'student':
			return part.u * Math.min(2000, 8 + 60 / part.degreesOfFreedom ** 2 + 200 / part.degreesOfFreedom ** 4);
	}
}

/**
 * Student's t as normal distributions of uncertain width: weights of the variances ν/χ²(ν), over log χ².
 * returns  pairs of variance factor and weight, weights adding to 1
 */
function varianceMixture(degreesOfFreedom: number): { factor: number; weight: number }[] {
	const half = degreesOfFreedom / 2;
	// The density of log χ² peaks at log ν and is about √(2/ν) wide; its left tail is the long one.
	const width = Math.sqrt(2 / degreesOfFreedom);
	const from = Math.log(degreesOfFreedom) - 10 * width - 20 / degreesOfFreedom;
	const to = Math.log(degreesOfFreedom) + 6 * width + 1.5;
	const nodes = Array.from({ length: VARIANCE_NODES }, (_, i) => {
		const logChi2 = from + ((i + 0.5) * (to - from)) / VARIANCE_NODES;
		const chi2 = Math.exp(logChi2);
		const log = half * logChi2 - chi2 / 2 - (half * Math.log(degreesOfFreedom) - half);
		return { factor: degreesOfFreedom / chi2, weight: Math.exp(log) };
	});
	const total = nodes.reduce((sum, node) => sum + node.weight, 0);
	return nodes.map(({ factor, weight }) => ({ factor, weight: weight / total }));
}

/** Characteristic function of a part, a real and even function of t. */
function characteristicOf(part: SumPart): (t: number) => number {
	switch (part.shape) {
		case 'normal':
			return (t) => Math.exp(-((t * part.u) ** 2) / 2);
		case 'rectangular':
			return (t) => sinc(t * part.u * Math.sqrt(3));
		case 'triangular':
			return (t) => sinc((t * part.u * Math.sqrt(6)) / 2) ** 2;
		case 'student': {
			const mixture = varianceMixture(part.degreesOfFreedom);
			return (t) => {
				const exponent = (t * part.u) ** 2 / 2;
				return mixture.reduce((sum, { factor, weight }) => sum + weight * Math.exp(-exponent * factor), 0);
			};
		}
	}
}

/**
 * Probability that the sum of independent parts lies inside ±bound.
 * parts    u ≥ 0, in the unit of the bound; parts of 0 are left out
 * bound    ≥ 0
 * returns  0 … 1, right to 1e-4 (Student parts of fewer than three degrees of freedom: to 1e-3); 1 without any part
 * method   the density on ±reach as a cosine series, its coefficients the product of the characteristic functions,
 *          integrated term by term
 * source   Gil-Pelaez, Biometrika 38, 1951 (from memory); it is the convolution that JCGM 101:2008 does by simulation
 */
export function coverageOfSum(parts: readonly SumPart[], bound: number): number {
	const counted = parts.filter((part) => part.u > 0);
	const reach = counted.reduce((sum, part) => sum + reachOf(part), 0);
	if (bound >= reach) return 1;
	const functions = counted.map(characteristicOf);
	const falling = functions.filter(
		(_, i) => counted[i]!.shape === 'normal' || counted[i]!.shape === 'student'
	);
	let sum = bound / reach;
	for (let n = 1; n <= TERMS; n++) {
		const t = (n * Math.PI) / reach;
		const product = functions.reduce((value, characteristic) => value * characteristic(t), 1);
		sum += (2 / (n * Math.PI)) * product * Math.sin(t * bound);
		if (falling.some((characteristic) => characteristic(t) < NEGLIGIBLE)) break;
	}
	return Math.min(1, Math.max(0, sum));
}

/**
 * Half-width that holds the sum of independent parts with a given probability.
 * probability  0 < p < 1
 * returns      in the unit of the parts, by halving, to 1e-6 of the root of the summed squares
 */
export function boundOfSum(parts: readonly SumPart[], probability: number): number {
	const u = Math.sqrt(parts.reduce((sum, part) => sum + part.u * part.u, 0));
	let low = 0;
	let high = Math.max(2 * u, Number.MIN_VALUE);
	while (u > 0 && coverageOfSum(parts, high) < probability && high < 1000 * u) high *= 2;
	while (high - low > 1e-6 * u) {
		const middle = (low + high) / 2;
		if (coverageOfSum(parts, middle) < probability) low = middle;
		else high = middle;
	}
	return high;
}
