/** "V_ch1", "Ia_I", "Voltage L1", "Spannung", "Strom": a quantity by its symbol or word. */
export function quantityByName(name: string): 'voltage' | 'current' | null {
	if (/^(u|v)(?![a-z]*alue)([^a-z]|rms|l?[1-3]|[abcrstn]{1,2}([^a-z]|$)|$)|volt|spann|tension/i.test(name))
		return 'voltage';
	if (/^i([^a-z]|rms|l?[1-3]|[abcrstn]([^a-z]|$)|$)|current|amp|strom|courant|corrente/i.test(name))
		return 'current';
	return null;
}
