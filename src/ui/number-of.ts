/** What was typed as a number; NaN where it is none, so that the schema refuses it. */
export function numberOf(typed: unknown, isOptional: boolean): number | null {
	if (typeof typed === 'number' || typed === null) return typed;
	const text = String(typed ?? '')
		.trim()
		.replace('\u2212', '-')
		.replace(',', '.');
	if (text === '') return isOptional ? null : Number.NaN;
	return Number(text);
}
