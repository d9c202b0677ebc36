const ENTITY: Record<string, string> = {
	'&': '&amp;',
	'<': '&lt;',
	'>': '&gt;',
	'"': '&quot;',
	"'": '&#39;'
};

/** Text as it may stand in HTML, between tags or inside a quoted attribute. */
export function escapeHtml(text: string): string {
	return text.replace(/[&<>"']/g, (sign) => ENTITY[sign] ?? sign);
}
