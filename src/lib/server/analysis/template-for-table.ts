import type { CaptureHandle } from '../../recording/capture-handle';
import { guessTable } from '../../recording/read-capture';
import {
	APPLIED_FROM,
	fitLayout,
	likelyTemplates
} from '../../recording/readers/delimited-text/layout-likeness';
import type { ToldLayout } from '../../recording/readers/delimited-text/table-layout-told';
import type { ReadRemark } from '../../recording/recording';
import type { Db } from '../db/database';
import { layoutTemplatesRepository } from '../repositories/layout-templates.repository';
import type { Scope } from '../repositories/scope';

/** A template of the practice that fits a table so well that it is applied without being asked. */
export interface FittingTemplate {
	templateId: string;
	layout: ToldLayout;
	/** Says so where the capture is shown. */
	remark: ReadRemark;
}

/** The likest of the practice's templates for a table of text; null where none is (nearly) the same. */
export async function templateFor(
	db: Db,
	scope: Pick<Scope, 'practiceId'>,
	files: readonly CaptureHandle[]
): Promise<FittingTemplate | null> {
	const templates = await layoutTemplatesRepository(db, scope).inUse();
	const guess = templates.length === 0 ? null : guessTable(files);
	const [best] = guess === null ? [] : likelyTemplates(templates, guess.headings);
	if (guess === null || best === undefined || best.likeness < APPLIED_FROM) return null;
	const layout = fitLayout(best.template, guess.headings, guess.layout);
	return {
		templateId: best.template.id,
		layout,
		remark: {
			severity: 'note',
			code: 'template-applied',
			sentence: `The headings are those of the template “${best.template.name}”; the columns were read as it tells. Tell them otherwise if this file differs.`
		}
	};
}
