/** Writes docs/analyse-output.schema.json anew; run it when document-schema.ts changes. */
import { writeFileSync } from 'node:fs';
import { format, resolveConfig } from 'prettier';
import { analysisJsonSchema } from '../src/lib/analysis-document/document-schema';

const FILE = 'docs/analyse-output.schema.json';

writeFileSync(
	FILE,
	await format(JSON.stringify(analysisJsonSchema()), { ...(await resolveConfig(FILE)), filepath: FILE })
);
