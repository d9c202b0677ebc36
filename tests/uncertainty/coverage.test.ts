import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { simulateCoverage, type OrderCoverage } from '../../scripts/uncertainty/coverage-simulation';
import { CERTIFIED_SIMULATION, CLASS_SIMULATION } from '../../scripts/uncertainty/simulated-chains';
import { angleTable, coverageTable, uncertaintyTable } from '../../scripts/uncertainty/tables';

/** Rows of the table between two markers of the document, cells without padding. */
function tableOf(text: string, name: string): string[][] {
	const from = text.indexOf(`<!-- ${name} -->`);
	const to = text.indexOf(`<!-- end of ${name} -->`);
	return text
		.slice(from, to)
		.split('\n')
		.filter((line) => line.startsWith('|'))
		.map(cellsOf)
		.filter(isNoRule);
}
const cellsOf = (line: string) =>
	line
		.split('|')
		.slice(1, -1)
		.map((cell) => cell.trim());
const isNoRule = (cells: string[]) => !cells.every((cell) => /^:?-+:?$/.test(cell));

const DOCUMENT = readFileSync('docs/uncertainty.md', 'utf8');

describe('the document', () => {
	it.each([
		['uncertainties', uncertaintyTable],
		['angles', angleTable],
		['coverages', coverageTable]
	])('has the %s that the code gives today (npm run uncertainty)', (name, table) => {
		const today = table().split('\n').map(cellsOf).filter(isNoRule);
		expect(tableOf(DOCUMENT, name)).toEqual(today);
	});
});

// The share of true values inside ±U is its own yardstick: the truth of a synthetic capture is known.
describe('true values inside ±U', () => {
	const printed = tableOf(DOCUMENT, 'simulation').slice(1);
	// One figure more or less inside may tip a printed digit on another machine.
	const expectPrinted = (found: OrderCoverage[], column: number) =>
		found.forEach(({ order, inside }) => {
			const cell = printed[order - 1]?.[column];
			expect(Math.abs(100 * inside - Number(cell)), `order ${order}, printed ${cell}`).toBeLessThan(0.2);
		});

	it('are 95 ± 1.5 % at every order where no bound dominates, 1,000 captures', { timeout: 240_000 }, () => {
		const found = simulateCoverage(CERTIFIED_SIMULATION);
		expect(found).toHaveLength(50);
		for (const { order, inside, promised, figures } of found) {
			expect(figures).toBe(8000);
			expect(inside, `order ${order}`).toBeGreaterThan(0.935);
			expect(inside, `order ${order}`).toBeLessThan(0.965);
			expect(Math.abs(inside - promised), `order ${order}`).toBeLessThan(0.015);
		}
		expectPrinted(found, 2);
	});

	it('are more where the recorder’s class limit dominates', { timeout: 120_000 }, () => {
		const found = simulateCoverage(CLASS_SIMULATION);
		for (const { order, inside, promised } of found) {
			expect(inside, `order ${order}`).toBeGreaterThan(0.99);
			expect(promised, `order ${order}`).toBeGreaterThan(0.99);
		}
		expectPrinted(found, 5);
	});
});
