/** Text that PostgreSQL takes: a NUL or half a surrogate pair, as a broken file may hold, becomes U+FFFD. */
export function storableText(text: string): string {
	return text.replaceAll('\0', '\ufffd').replaceAll(/[\ud800-\udfff]/gu, '\ufffd');
}

/** The same for every text inside plain data. */
export function storable<Value>(value: Value): Value {
	return JSON.parse(JSON.stringify(value), (_, entry: unknown) => (typeof entry === 'string' ? storableText(entry) : entry)) as Value;
}
