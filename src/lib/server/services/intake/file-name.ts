import { AppError } from '../../app-error';

const LONGEST_NAME = 200;

/** The last part of whatever path a browser sent, without control characters. */
export function cleanFileName(raw: string): string {
	const last = raw.split(/[\\/]/).at(-1) ?? '';
	// eslint-disable-next-line no-control-regex -- control characters are what is taken out
	const name = last.replace(/[\u0000-\u001f\u007f]/g, '').trim();
	if (name === '' || name === '.' || name === '..')
		throw new AppError('invalid', 'The file has no name. Give it one and choose it again.');
	if (name.length > LONGEST_NAME)
		throw new AppError(
			'invalid',
			`The file name is longer than ${LONGEST_NAME} characters. Shorten it and choose the file again.`
		);
	return name;
}
