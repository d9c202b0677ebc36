/** The sensor at an input, as far as readings need it. */
export interface InputSensor {
	name: string;
	/** Primary A or V for each A or V at the input; null = not known. */
	toPrimary: number | null;
	/** As it is written, e.g. "1000 A : 1 V". */
	ratioText: string;
	/** What comes out of it: many current sensors give a voltage. */
	gives: 'voltage' | 'current';
	/** Rated primary value, A or V; null = not known. */
	ratedPrimary: number | null;
}

/** One input of the instrument that recorded a capture. */
export interface MeasuringInput {
	name: string;
	quantity: 'voltage' | 'current';
	/** Null: measured directly. */
	sensor: InputSensor | null;
}

export interface MeasuringInstrument {
	name: string;
	/** In the order of its terminals. */
	inputs: readonly MeasuringInput[];
}

interface FileChannel {
	name: string;
	quantity: 'voltage' | 'current' | 'other';
}

const plain = (name: string): string => name.toLowerCase().replace(/[^\p{L}\p{N}]/gu, '');

/** A current input behind a sensor that gives volts may stand in the file as a voltage. */
function fits({ quantity }: FileChannel, input: MeasuringInput): boolean {
	return (
		quantity === 'other' ||
		quantity === input.quantity ||
		(input.quantity === 'current' && quantity === 'voltage' && input.sensor?.gives === 'voltage')
	);
}

/**
 * The input behind each channel of a file: by its name, or, where no name fits and there are as many channels as
 * inputs that all measure what the channels say, by its place.
 * returns  an index into `inputs` for each channel, null where none is known
 */
export function matchInputs(
	channels: readonly FileChannel[],
	inputs: readonly MeasuringInput[]
): (number | null)[] {
	const named = channels.map((channel) => {
		const wanted = plain(channel.name);
		const found = inputs.flatMap((input, i) =>
			wanted !== '' && plain(input.name) === wanted && fits(channel, input) ? [i] : []
		);
		const twins = channels.filter((other) => plain(other.name) === wanted);
		return found.length === 1 && twins.length === 1 ? (found[0] ?? null) : null;
	});
	if (named.some((index) => index !== null)) return named;
	const byPlace =
		channels.length === inputs.length && channels.every((channel, i) => fits(channel, inputs[i]!));
	return byPlace ? channels.map((_, i) => i) : named;
}

/** Secondary circuits of current transformers carry 1 A or 5 A; a sensor for up to so many times that is put there. */
const SECONDARY_SIDE_MOST = 4;

/**
 * Factor from a value at an input to the primary one.
 * transformer  ratio of the transformer at the point for the input's quantity; null = none
 * returns      null where a sensor's ratio is not known; `throughBoth` where the sensor is too small for the
 *              transformer's primary and so was put on its secondary: both ratios then count
 */
export function inputToPrimary(
	{ quantity, sensor }: MeasuringInput,
	transformer: { primary: number; secondary: number } | null
): { toPrimary: number; throughBoth: boolean } | null {
	const ofTransformer = transformer === null ? 1 : transformer.primary / transformer.secondary;
	if (sensor === null) return { toPrimary: ofTransformer, throughBoth: false };
	if (sensor.toPrimary === null) return null;
	// Behind a voltage transformer everything is on its secondary, unless the sensor is that transformer itself.
	const rated = sensor.ratedPrimary;
	const onSecondary =
		transformer !== null &&
		rated !== null &&
		rated < transformer.primary / 2 &&
		(quantity === 'voltage' || rated <= SECONDARY_SIDE_MOST * transformer.secondary);
	return onSecondary
		? { toPrimary: sensor.toPrimary * ofTransformer, throughBoth: true }
		: { toPrimary: sensor.toPrimary, throughBoth: false };
}
