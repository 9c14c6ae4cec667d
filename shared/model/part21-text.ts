/** Decodes the inside of a Part 21 string (ISO 10303-21:2016 § 6.4.3): doubled apostrophes, \\, \S\, \P.\, \X\, \X2\…\X0\, \X4\…\X0\. Escapes that are broken stay as written. */

const HEX = /^[0-9A-Fa-f]+$/;

/** ISO 8859 pages that \P.\ may choose; TextDecoder knows them under these names. */
const PAGES: Readonly<Record<string, string>> = {
	A: 'iso-8859-1',
	B: 'iso-8859-2',
	C: 'iso-8859-3',
	D: 'iso-8859-4',
	E: 'iso-8859-5',
	F: 'iso-8859-6',
	G: 'iso-8859-7',
	H: 'iso-8859-8',
	I: 'iso-8859-9',
};

const utf8 = new TextDecoder('utf-8', { fatal: true });
const latin1 = new TextDecoder('windows-1252');

/** Bytes as text: UTF-8 where they are UTF-8, else Windows-1252 (a superset of the printable ISO 8859-1), as old programs write them raw. */
export function decodeBytes(bytes: Uint8Array): string {
	let isAscii = true;
	for (const byte of bytes) {
		if (byte > 127) {
			isAscii = false;
			break;
		}
	}
	if (isAscii && bytes.length < 64) return String.fromCharCode(...bytes);
	if (isAscii) return latin1.decode(bytes);
	try {
		return utf8.decode(bytes);
	} catch {
		return latin1.decode(bytes);
	}
}

function decodeHexRun(hex: string, digits: 4 | 8): string | null {
	if (hex.length === 0 || hex.length % digits !== 0 || !HEX.test(hex)) return null;
	let text = '';
	for (let at = 0; at < hex.length; at += digits) {
		const code = Number.parseInt(hex.slice(at, at + digits), 16);
		if (digits === 4) text += String.fromCharCode(code);
		else if (code <= 0x10ffff) text += String.fromCodePoint(code);
		else return null;
	}
	return text;
}

function decodePageByte(page: string, code: number): string {
	return new TextDecoder(page).decode(Uint8Array.of(code));
}

const isPlain = (code: number): boolean => code !== 92 && code !== 39 && code !== 10 && code !== 13;

/** The text between the outer apostrophes of a Part 21 string, decoded. Line breaks inside are dropped, as the standard says. Linear in its length. */
export function decodePart21String(raw: string): string {
	if (!raw.includes('\\') && !raw.includes("''") && !raw.includes('\n') && !raw.includes('\r')) return raw;
	let page = 'iso-8859-1';
	const parts: string[] = [];
	let at = 0;
	while (at < raw.length) {
		const character = raw[at]!;
		if (character === "'" && raw[at + 1] === "'") {
			parts.push("'");
			at += 2;
		} else if (character === '\n' || character === '\r') {
			at++;
		} else if (character !== '\\') {
			const from = at++;
			while (at < raw.length && isPlain(raw.charCodeAt(at))) at++;
			parts.push(raw.slice(from, at));
		} else if (raw[at + 1] === '\\') {
			parts.push('\\');
			at += 2;
		} else if (raw[at + 1] === 'S' && raw[at + 2] === '\\' && at + 3 < raw.length) {
			parts.push(decodePageByte(page, (raw.charCodeAt(at + 3) & 127) + 128));
			// An apostrophe is doubled here too (§ is \S\'').
			at += raw[at + 3] === "'" && raw[at + 4] === "'" ? 5 : 4;
		} else if (raw[at + 1] === 'P' && raw[at + 3] === '\\' && PAGES[raw[at + 2] ?? ''] !== undefined) {
			page = PAGES[raw[at + 2]!]!;
			at += 4;
		} else if (raw[at + 1] === 'X' && raw[at + 2] === '\\' && HEX.test(raw.slice(at + 3, at + 5)) && raw.length >= at + 5) {
			parts.push(String.fromCharCode(Number.parseInt(raw.slice(at + 3, at + 5), 16)));
			at += 5;
		} else if (raw[at + 1] === 'X' && (raw[at + 2] === '2' || raw[at + 2] === '4') && raw[at + 3] === '\\') {
			// Looked for only as far as hexadecimal digits go, so that many unclosed escapes stay linear.
			let end = at + 4;
			while (end < raw.length && raw[end] !== '\\') end++;
			const decoded = raw.startsWith('\\X0\\', end) ? decodeHexRun(raw.slice(at + 4, end), raw[at + 2] === '2' ? 4 : 8) : null;
			if (decoded === null) {
				parts.push(character);
				at++;
			} else {
				parts.push(decoded);
				at = end + 4;
			}
		} else {
			parts.push(character);
			at++;
		}
	}
	return parts.join('');
}
