/** A figure for the screen: null = no data, never zero. */
export type Figure = number | null;

export const figure = (value: number | undefined): Figure =>
	value !== undefined && Number.isFinite(value) ? Number(value.toPrecision(7)) : null;
