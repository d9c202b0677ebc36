/** Writes the tables of docs/uncertainty.md; `npm run uncertainty`. The simulation takes about a minute. */
import { readFileSync, writeFileSync } from 'node:fs';
import { format, resolveConfig } from 'prettier';
import { simulateCoverage } from './uncertainty/coverage-simulation';
import { CERTIFIED_SIMULATION, CLASS_SIMULATION } from './uncertainty/simulated-chains';
import {
	angleTable,
	coverageTable,
	simulationTable,
	uncertaintyTable,
	withTables
} from './uncertainty/tables';

const DOCUMENT = 'docs/uncertainty.md';

const written = withTables(readFileSync(DOCUMENT, 'utf8'), {
	uncertainties: uncertaintyTable(),
	angles: angleTable(),
	coverages: coverageTable(),
	simulation: simulationTable(simulateCoverage(CERTIFIED_SIMULATION), simulateCoverage(CLASS_SIMULATION))
});
writeFileSync(DOCUMENT, await format(written, { ...(await resolveConfig(DOCUMENT)), filepath: DOCUMENT }));
