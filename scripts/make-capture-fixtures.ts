import { mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { captureFixtures } from '../src/lib/synthesis/capture-fixtures';

// Run with: node --import tsx scripts/make-capture-fixtures.ts
const folder = fileURLToPath(new URL('../fixtures/captures/', import.meta.url));
mkdirSync(folder, { recursive: true });
for (const { name, bytes } of captureFixtures()) writeFileSync(join(folder, name), bytes);
