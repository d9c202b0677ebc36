/** All files of dropped entries, folders and theirs included; hidden files, which systems leave behind, are not. */
export async function filesOfEntries(entries: readonly FileSystemEntry[]): Promise<File[]> {
	const files = await Promise.all(entries.map(filesOf));
	return files.flat();
}

async function filesOf(entry: FileSystemEntry): Promise<File[]> {
	if (entry.name.startsWith('.')) return [];
	if (entry.isDirectory) {
		const reader = (entry as FileSystemDirectoryEntry).createReader();
		const inside: FileSystemEntry[] = [];
		// A reader gives a hundred entries at a time, and none when all were given.
		for (let some = await next(reader); some.length > 0; some = await next(reader)) inside.push(...some);
		return filesOfEntries(inside);
	}
	return [await new Promise<File>((resolve, reject) => (entry as FileSystemFileEntry).file(resolve, reject))];
}

function next(reader: FileSystemDirectoryReader): Promise<FileSystemEntry[]> {
	return new Promise((resolve, reject) => reader.readEntries(resolve, reject));
}
