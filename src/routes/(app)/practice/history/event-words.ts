/** "report.issued" → "Report issued": actions are written as noun and past tense, so they read as they are. */
export function eventWords(action: string): string {
	const words = action.replaceAll('.', ' ').replaceAll('-', ' ');
	return words.charAt(0).toUpperCase() + words.slice(1);
}

const spaced = (name: string) =>
	name
		.replace(/([a-z0-9])([A-Z])/g, '$1 $2')
		.replaceAll('_', ' ')
		.toLowerCase();

function valueText(value: unknown): string {
	if (value === null || value === '') return 'nothing';
	if (typeof value === 'boolean') return value ? 'yes' : 'no';
	if (Array.isArray(value)) return value.map(valueText).join(', ');
	if (typeof value !== 'object') return String(value);
	const entries = Object.entries(value);
	const change = Object.fromEntries(entries);
	if (entries.length === 2 && 'from' in change && 'to' in change)
		return `from ${valueText(change['from'])} to ${valueText(change['to'])}`;
	return entries.map(([name, inner]) => `${spaced(name)} ${valueText(inner)}`).join(', ');
}

/** The details of an event as terms and values. */
export function eventDetails(json: string): { term: string; value: string }[] {
	const detail: unknown = JSON.parse(json);
	if (typeof detail !== 'object' || detail === null) return [];
	return Object.entries(detail)
		.filter(([, value]) => value !== null)
		.map(([name, value]) => ({ term: spaced(name), value: valueText(value) }));
}
