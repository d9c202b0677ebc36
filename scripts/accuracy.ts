/** Writes docs/accuracy.md; `npm run accuracy`. Takes two to three minutes. */
import { writeFileSync } from 'node:fs';
import { format, resolveConfig } from 'prettier';
import { accuracyDocument, DOCUMENT } from './accuracy/document';

writeFileSync(
	DOCUMENT,
	await format(accuracyDocument(), { ...(await resolveConfig(DOCUMENT)), filepath: DOCUMENT })
);
