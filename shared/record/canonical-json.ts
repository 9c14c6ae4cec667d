/**
 * The one text that stands for a value, so that its SHA-256 is the same wherever and whenever it is computed.
 *
 * Source  RFC 8785, JSON Canonicalization Scheme: properties sorted by UTF-16 code units, numbers as ECMAScript prints them,
 *         no white space, no Unicode normalisation.
 * Errors  TypeError for what has no such text: NaN and infinities, a lone surrogate, an undefined list entry, and values that are
 *         no JSON (a Date, a Map, a bigint, a function). They are defects of the caller, never a person's input.
 */
export function canonicalJson(value: unknown): string {
	if (value === null || typeof value === 'boolean') return String(value);
	if (typeof value === 'number') return canonicalNumber(value);
	if (typeof value === 'string') return canonicalString(value);
	if (Array.isArray(value)) return `[${value.map((entry: unknown) => canonicalJson(entry)).join(',')}]`;
	if (typeof value === 'object' && isPlain(value)) {
		const members = Object.entries(value)
			.filter(([, entry]) => entry !== undefined)
			.sort(([one], [other]) => (one < other ? -1 : 1))
			.map(([key, entry]) => `${canonicalString(key)}:${canonicalJson(entry)}`);
		return `{${members.join(',')}}`;
	}
	throw new TypeError(`Canonical JSON has no text for ${Object.prototype.toString.call(value)}.`);
}

function canonicalNumber(value: number): string {
	if (!Number.isFinite(value)) throw new TypeError(`Canonical JSON has no text for ${value}.`);
	return JSON.stringify(value);
}

function canonicalString(value: string): string {
	// JSON.stringify would write a lone surrogate as an escape; the RFC asks for an error.
	if (/[\ud800-\udfff]/u.test(value)) throw new TypeError('Canonical JSON has no text for a lone surrogate.');
	return JSON.stringify(value);
}

function isPlain(value: object): boolean {
	const prototype: unknown = Object.getPrototypeOf(value);
	return prototype === Object.prototype || prototype === null;
}
