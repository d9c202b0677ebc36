import type { LayoutGuess } from '../recording/readers/delimited-text/guess-layout';
import type { TablePreview } from '../recording/readers/delimited-text/preview-table';
import type { Contradiction, ToldLayout } from '../recording/readers/delimited-text/table-layout-told';
import { problemSentence, RequestProblem } from './request-problem';

/** One way of reading a table: what it would make of the file, and why it was guessed so. */
export interface ToldTable {
	layout: ToldLayout;
	headings: string[];
	reasons: LayoutGuess['reasons'];
	columnReasons: string[];
	contradictions: Contradiction[];
	preview: TablePreview;
}

/**
 * What a layout would make of a capture's file.
 * columnsAnew  the columns are guessed for the writing that was told
 */
export async function previewTable(
	captureId: string,
	asked: { layout: ToldLayout; columnsAnew: boolean },
	signal: AbortSignal
): Promise<ToldTable> {
	const response = await fetch(`/api/v1/captures/${captureId}/table-preview`, {
		method: 'POST',
		headers: { accept: 'application/json', 'content-type': 'application/json' },
		body: JSON.stringify(asked),
		signal
	}).catch((cause: unknown) => {
		if (cause instanceof DOMException && cause.name === 'AbortError') throw cause;
		throw new RequestProblem('The server cannot be reached. Check the connection and try again.');
	});
	if (!response.ok) throw new RequestProblem(problemSentence(response.status, await response.text()));
	return response.json();
}
