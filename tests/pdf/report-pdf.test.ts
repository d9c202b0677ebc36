import { execFileSync, spawnSync } from 'node:child_process';
import { mkdtempSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import { drawReport } from '$lib/server/pdf/report-drawings';
import { reportDefinition } from '$lib/server/pdf/report-definition';
import { renderPdf, type RenderedPdf } from '$lib/server/pdf/render';
import type { ReportModel } from '$lib/report/report-model';
import { formatNumber } from '$lib/units/format';
import { reportModel } from '../report/report-sources';
import { readPdf, type ReadPdf } from './read-pdf';

async function make(model: ReportModel): Promise<RenderedPdf> {
	const drawings = await drawReport(model);
	return renderPdf(() => reportDefinition(model, drawings));
}

const hasPdffonts = spawnSync('pdffonts', ['-v']).error === undefined;

describe('an issued report', () => {
	const model = reportModel();
	let pdf: RenderedPdf;
	let read: ReadPdf;
	let all: string;
	beforeAll(async () => {
		pdf = await make(model);
		read = await readPdf(pdf.bytes);
		all = read.pages.join('\n');
	});

	it('has the pages that its title blocks count', () => {
		expect(read.pages.length).toBe(pdf.pages);
		read.pages.forEach((text, i) => expect(text).toContain(`${i + 1} of ${pdf.pages}`));
	});

	it('carries document number, status and data hash on every page', () => {
		for (const text of read.pages) {
			expect(text).toContain('TH-2026-0142');
			expect(text).toContain('issued 19 Mar 2026');
			expect(text).toContain('9f3c 51aa 07e2 b6d4');
		}
	});

	it('prints every value of the model, to the digit', () => {
		for (const rule of model.tables.flatMap((table) => table.rules))
			for (const row of rule.rows)
				for (const cell of row.cells)
					if (cell.value_pct !== null) expect(all).toContain(formatNumber(cell.value_pct, { decimals: 4 }));
	});

	it('says the verdict in a sentence, with its evidence, on the cover', () => {
		const cover = read.pages[0] ?? '';
		expect(cover).toContain('exceeds');
		expect(cover.replace(/\s/g, '')).toContain(model.verdict.sentence.replace(/\s/g, ''));
		expect(cover).toContain('Evidence: partial');
		expect(cover).not.toContain('DRAFT');
	});

	it('names clause, rule, uncertainty, cautions, captures and limit rows', () => {
		for (const words of [
			'clause 5.2',
			'Guarded decision',
			'Expanded uncertainty',
			'current transformer',
			'licensed engineer',
			'week-10.csv',
			'cross checked',
			model.lineage.captures[0]?.files[0]?.sha256.slice(0, 32) ?? '?'
		])
			expect(all).toContain(words);
	});

	it('shows TDD on demand current beside THD on the fundamental', () => {
		const worst = (values: { value_pct: number }[]) => Math.max(...values.map((one) => one.value_pct));
		const dashboard = read.pages.find((text) => text.includes('Results at a glance')) ?? '';
		expect(dashboard).toContain(formatNumber(worst(model.verdict.headline.tdd)));
		expect(dashboard).toContain(formatNumber(worst(model.verdict.headline.currentThd)));
	});

	it('has a title, a language and bookmarks', () => {
		expect(read.title).toBe('Harmonic compliance report, TH-2026-0142 rev A');
		expect(read.language).toBe('en');
		expect(read.outline).toEqual(expect.arrayContaining(['2 Summary', '5 Method', 'Appendix A: lineage']));
	});

	it('heads every page with its own section', () => {
		for (const title of read.outline) {
			// On a section's first page its title stands twice: in the head of the sheet and over the text.
			const first = read.pages.find((text) => text.split(title).length > 2);
			expect(first, title).toBeDefined();
		}
		for (const text of read.pages.slice(1))
			expect(read.outline.some((title) => text.includes(title))).toBe(true);
	});

	it('is the same, byte for byte, when made again', async () => {
		expect((await make(reportModel())).bytes.equals(pdf.bytes)).toBe(true);
	});

	it.skipIf(!hasPdffonts)('embeds every face (skipped where pdffonts of poppler-utils is absent)', () => {
		const file = join(mkdtempSync(join(tmpdir(), 'sinewright-pdf-')), 'report.pdf');
		writeFileSync(file, pdf.bytes);
		const faces = execFileSync('pdffonts', [file], { encoding: 'utf8' }).trim().split('\n').slice(2);
		expect(faces.length).toBeGreaterThan(2);
		for (const face of faces) {
			expect(face).toMatch(/IBMPlex/);
			expect(face).toMatch(/yes yes yes/);
		}
	});
});

describe('a draft', () => {
	it('says on every page that it is one, and an in-plant point that it is advisory', async () => {
		const model = reportModel({
			snapshot: true,
			facts: { kind: 'in-plant' },
			practice: { paper: 'LETTER' },
			document: { number: null, status: 'draft', issuedAt: null, checkedBy: null }
		});
		const read = await readPdf((await make(model)).bytes);
		for (const text of read.pages) expect(text).toContain('DRAFT, not issued');
		expect(read.pages[0]).toContain('DRAFT. Not checked');
		expect(read.pages[0]).toContain('advisory');
		expect(read.pages[0]).toContain('Evidence: snapshot');
	});
});

describe('a self-checked report', () => {
	it('says that nobody else checked it', async () => {
		const model = reportModel({ document: { checkedBy: 'M. Adeyemi', selfChecked: true } });
		const read = await readPdf((await make(model)).bytes);
		expect(read.pages[1]).toContain('no second engineer has checked it');
	});
});

describe('text from people', () => {
	it('is printed as text, whatever signs it holds', async () => {
		const model = reportModel({
			document: { title: 'Report <b>&amp; "quotes"' },
			facts: { name: 'Bus <2> & "A"' }
		});
		const read = await readPdf((await make(model)).bytes);
		expect(read.pages[0]).toContain('Report <b>&amp; "quotes"');
		expect(read.pages.join(' ')).toContain('Bus <2> & "A"');
	});
});
