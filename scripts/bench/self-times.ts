/** The part of a CPU profile that is looked at here (as the inspector protocol gives it). */
export interface Profile {
	nodes: { id: number; callFrame: { functionName: string; url: string; lineNumber: number } }[];
	samples?: number[];
	timeDeltas?: number[];
}

/** Functions by the share of time spent in themselves, greatest first. */
export function selfTimes({
	nodes,
	samples = [],
	timeDeltas = []
}: Profile): { name: string; share_pct: number }[] {
	const byId = new Map<number, number>();
	samples.forEach((id, i) => byId.set(id, (byId.get(id) ?? 0) + timeDeltas[i]!));
	const byName = new Map<string, number>();
	for (const { id, callFrame } of nodes) {
		const file = callFrame.url.split('/').pop() ?? '';
		const name = `${callFrame.functionName || '(anonymous)'} ${file}:${callFrame.lineNumber + 1}`;
		byName.set(name, (byName.get(name) ?? 0) + (byId.get(id) ?? 0));
	}
	const total = [...byName.values()].reduce((sum, time) => sum + time, 0);
	return [...byName]
		.map(([name, time]) => ({ name, share_pct: (100 * time) / total }))
		.sort((a, b) => b.share_pct - a.share_pct)
		.slice(0, 15);
}
