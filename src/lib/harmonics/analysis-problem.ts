/** Why a recording cannot be analysed; the sentence says what is needed. */
export type AnalysisProblem =
	| { code: 'no-mapped-channels'; sentence: string }
	| { code: 'rate-not-known'; sentence: string }
	| { code: 'rate-too-low'; sentence: string; have_Hz: number; need_Hz: number }
	| { code: 'no-fundamental'; sentence: string }
	| { code: 'record-too-short'; sentence: string; have_s: number; need_s: number };
