import type { PhaseNames } from '../recording/phase';

export const PHASE_PRESETS = {
	L: { L1: 'L1', L2: 'L2', L3: 'L3', N: 'N' },
	A: { L1: 'A', L2: 'B', L3: 'C', N: 'N' },
	R: { L1: 'R', L2: 'S', L3: 'T', N: 'N' }
} as const satisfies Record<string, PhaseNames>;

export type PhasePreset = keyof typeof PHASE_PRESETS | 'own';
export const PHASE_PRESET_KEYS = ['L', 'A', 'R', 'own'] as const satisfies readonly PhasePreset[];

export const PHASE_PRESET_WORDS: Record<PhasePreset, string> = {
	L: 'L1 L2 L3',
	A: 'A B C',
	R: 'R S T',
	own: 'Own names'
};

/** The preset that has exactly these names, else `own`. */
export function presetOf(names: PhaseNames): PhasePreset {
	const found = (['L', 'A', 'R'] as const).find((key) => {
		const preset = PHASE_PRESETS[key];
		return (['L1', 'L2', 'L3', 'N'] as const).every((phase) => preset[phase] === names[phase]);
	});
	return found ?? 'own';
}
