/** Directions between rooms are the linter's affair (eslint.config.js); this looks at what a linter does not see. */
import { existsSync, readdirSync, readFileSync, statSync } from 'node:fs';
import { dirname, join, resolve } from 'node:path';
import { describe, expect, it } from 'vitest';

function walk(folder: string): string[] {
	return readdirSync(folder).flatMap((name) => {
		const path = join(folder, name);
		return statSync(path).isDirectory() ? walk(path) : /\.(ts|svelte)$/.test(name) ? [path] : [];
	});
}

const FILES = walk('src');
const source = new Map(FILES.map((file) => [file, readFileSync(file, 'utf8')]));

function resolved(from: string, specifier: string): string | null {
	const base = specifier.startsWith('$lib/')
		? join('src/lib', specifier.slice(5))
		: specifier.startsWith('.')
			? join(dirname(from), specifier)
			: null;
	if (base === null) return null;
	return (
		[base, `${base}.ts`, `${base}.svelte.ts`].find((path) => source.has(path) || existsSync(resolve(path))) ??
		null
	);
}

/** Imports that exist at run time; those of types only leave nothing behind. */
function valueImports(file: string): string[] {
	const text = source.get(file) ?? '';
	return [...text.matchAll(/^\s*(?:import|export)\s+(?!type\b)(?:[^'"]*?\sfrom\s+)?'([^']+)'/gm)]
		.filter((found) => !/^\s*import\s*\{\s*(type\s+\w+(\s+as\s+\w+)?\s*,?\s*)+\}\s*from/.test(found[0]))
		.flatMap((found) => resolved(file, found[1]!) ?? []);
}

describe('the house', () => {
	it('has no circle of imports', () => {
		const done = new Set<string>();
		const circles: string[] = [];
		const visit = (file: string, path: string[]): void => {
			if (path.includes(file)) circles.push([...path.slice(path.indexOf(file)), file].join(' → '));
			else if (!done.has(file)) {
				for (const next of valueImports(file)) visit(next, [...path, file]);
				done.add(file);
			}
		};
		for (const file of FILES) visit(file, []);
		expect(circles).toEqual([]);
	});

	it('has no dumping ground and no barrel', () => {
		expect(FILES.filter((file) => /\/(utils?|helpers?|misc|common)\//.test(file))).toEqual([]);
		const barrels = FILES.filter((file) => {
			const lines = (source.get(file) ?? '')
				.split('\n')
				.filter((line) => line.trim() !== '' && !line.startsWith('//'));
			// The compiler makes the module's exports of those of its entry file.
			if (file.endsWith('/kernels/assembly/kernels.ts')) return false;
			return file.endsWith('.ts') && lines.length > 0 && lines.every((line) => /^export .* from /.test(line));
		});
		expect(barrels).toEqual([]);
	});

	it('exports by name', () => {
		const unnamed = FILES.filter(
			(file) =>
				file.startsWith('src/lib') && file.endsWith('.ts') && /^export default/m.test(source.get(file) ?? '')
		);
		expect(unnamed).toEqual([]);
	});

	it('gives time and chance to the numerics and the verdict as arguments', () => {
		const asking = FILES.filter(
			(file) =>
				/^src\/lib\/(numerics|harmonics|limits|assessment|recording|report)\//.test(file) &&
				/new Date\(\)|Date\.now\(\)|Math\.random\(\)/.test(source.get(file) ?? '')
		);
		expect(asking).toEqual([]);
	});
});
