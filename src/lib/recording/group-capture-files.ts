/** Extensions that belong to one COMTRADE capture, the leading file first. */
const COMTRADE_ORDER = ['.cfg', '.dat', '.hdr', '.inf'];

function extensionOf(name: string): string {
	const dot = name.lastIndexOf('.');
	return dot < 0 ? '' : name.slice(dot).toLowerCase();
}

function stemOf(name: string): string {
	const dot = name.lastIndexOf('.');
	return (dot < 0 ? name : name.slice(0, dot)).toLowerCase();
}

/**
 * Which of the files dragged in together make one capture: CFG, DAT, HDR and INF of one stem go together,
 * everything else stands alone. Groups keep the order in which their first file came. A HDR or INF without a
 * CFG or DAT is a group of its own, so that nothing disappears silently.
 */
export function groupCaptureFiles(names: string[]): string[][] {
	const groups = new Map<string, string[]>();
	for (const [position, name] of names.entries()) {
		const extension = extensionOf(name);
		const base = COMTRADE_ORDER.includes(extension) ? `set ${stemOf(name)}` : `alone ${position}`;
		// Two files of one kind and stem ("A.CFG" and "a.cfg") cannot share a capture.
		let key = base;
		for (let again = 2; groups.get(key)?.some((other) => extensionOf(other) === extension); again++)
			key = `${base} ${again}`;
		groups.set(key, [...(groups.get(key) ?? []), name]);
	}
	return [...groups.values()].map((group) =>
		[...group].sort(
			(one, other) => COMTRADE_ORDER.indexOf(extensionOf(one)) - COMTRADE_ORDER.indexOf(extensionOf(other))
		)
	);
}

/** What is still missing before a group can be read, as a sentence; null for a complete one. */
export function incompleteGroupSentence(group: readonly string[]): string | null {
	const find = (extension: string) => group.find((name) => extensionOf(name) === extension);
	const stem = (name: string) => name.slice(0, name.lastIndexOf('.'));
	const configuration = find('.cfg');
	const data = find('.dat');
	if (configuration !== undefined && data === undefined)
		return `${configuration} came without its data file; add ${stem(configuration)}.dat.`;
	if (data !== undefined && configuration === undefined)
		return `${data} came without its configuration; add ${stem(data)}.cfg.`;
	const [only] = group;
	if (only !== undefined && configuration === undefined && (find('.hdr') ?? find('.inf')) !== undefined)
		return `${only} holds only notes; add ${stem(only)}.cfg and ${stem(only)}.dat.`;
	return null;
}
