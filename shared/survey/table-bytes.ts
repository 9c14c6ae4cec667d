import type { PointTableReading } from './point-table-schema.ts';

/** What a point file may be at most. */
export const pointTableLimits = { bytes: 32 * 1024 * 1024, rows: 250_000, lineLength: 10_000, nameLength: 60, columns: 200 } as const;

export type TextEncodingName = PointTableReading['encoding'];

/** A file as bytes in which commas, digits and line ends are single bytes, and a way back from a span of them to text. */
export interface ScannableText {
	readonly bytes: Uint8Array;
	readonly decode: (start: number, end: number) => string;
}

/** Why a file is no table of text at all, as a sentence; null where it may be one. */
export function whyNoTable(bytes: Uint8Array): string | null {
	if (bytes.length === 0) return 'The file is empty.';
	if (bytes.length > pointTableLimits.bytes)
		return `The file has ${(bytes.length / 1024 / 1024).toFixed(0)} MB; at most ${pointTableLimits.bytes / 1024 / 1024} MB are read.`;
	if (bytes[0] === 0x50 && bytes[1] === 0x4b && bytes[2] === 3 && bytes[3] === 4)
		return 'This is a ZIP file or a workbook (XLSX), not a text file. Save it as CSV.';
	if (bytes[0] === 0xd0 && bytes[1] === 0xcf && bytes[2] === 0x11 && bytes[3] === 0xe0)
		return 'This is an old workbook (XLS), not a text file. Save it as CSV.';
	if (bytes[0] === 0x25 && bytes[1] === 0x50 && bytes[2] === 0x44 && bytes[3] === 0x46) return 'This is a PDF, not a text file.';
	return null;
}

function isAscii(bytes: Uint8Array): boolean {
	let i = 0;
	// Four bytes at a time where the memory lies for it.
	if (bytes.byteOffset % 4 === 0) {
		const words = new Uint32Array(bytes.buffer, bytes.byteOffset, bytes.length >> 2);
		for (let k = 0; k < words.length; k++) if ((words[k]! & 0x80808080) !== 0) return false;
		i = words.length * 4;
	}
	for (; i < bytes.length; i++) if (bytes[i]! >= 0x80) return false;
	return true;
}

/** UTF-8 with or without its mark, UTF-16 by its mark or its zeros, else what Windows wrote in western Europe. */
export function detectEncoding(bytes: Uint8Array): TextEncodingName {
	if (bytes[0] === 0xff && bytes[1] === 0xfe) return 'utf-16le';
	if (bytes[0] === 0xfe && bytes[1] === 0xff) return 'utf-16be';
	const zeros = [0, 0];
	const looked = Math.min(bytes.length, 1000);
	for (let i = 0; i < looked; i++) if (bytes[i] === 0) zeros[i % 2]!++;
	if (zeros[1]! > 0.3 * (looked / 2) && zeros[0] === 0) return 'utf-16le';
	if (zeros[0]! > 0.3 * (looked / 2) && zeros[1] === 0) return 'utf-16be';
	if (isAscii(bytes)) return 'utf-8';
	try {
		new TextDecoder('utf-8', { fatal: true }).decode(bytes);
		return 'utf-8';
	} catch {
		return 'windows-1252';
	}
}

/**
 * What Windows-1252 has where ISO 8859-1 has control characters, from byte 80 on; five are not assigned. A table of our own, because the
 * decoder of some engines takes the one for the other.
 */
const windows1252 = '€\ufffd‚ƒ„…†‡ˆ‰Š‹Œ\ufffdŽ\ufffd\ufffd‘’“”•–—˜™š›œ\ufffdžŸ';

function decodeWindows1252(bytes: Uint8Array): string {
	let text = '';
	for (const byte of bytes) text += byte >= 0x80 && byte < 0xa0 ? windows1252[byte - 0x80] : String.fromCharCode(byte);
	return text;
}

/** Makes a file scannable. Names and codes are decoded only where they are asked for. */
export function scannableText(bytes: Uint8Array, encoding: TextEncodingName): ScannableText {
	if (encoding === 'utf-16le' || encoding === 'utf-16be')
		return scannableText(new TextEncoder().encode(new TextDecoder(encoding).decode(bytes)), 'utf-8');
	const hasMark = encoding === 'utf-8' && bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf;
	const body = hasMark ? bytes.subarray(3) : bytes;
	const decoder = new TextDecoder('utf-8');
	// One character a byte, so that a slice by bytes is right wherever all are ASCII; cutting it makes no copy byte by byte.
	// Made when the first text is asked for: who wants the numbers alone does not pay for it.
	let narrow: string | null = null;
	const decode = (start: number, end: number): string => {
		for (let i = start; i < end; i++) {
			if (body[i]! >= 0x80)
				return encoding === 'utf-8' ? decoder.decode(body.subarray(start, end)) : decodeWindows1252(body.subarray(start, end));
		}
		narrow ??= new TextDecoder('latin1').decode(body);
		return narrow.slice(start, end);
	};
	return { bytes: body, decode };
}
