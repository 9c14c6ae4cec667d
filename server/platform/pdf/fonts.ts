import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';

/** The fonts that we print with: each style's Latin file, and its extension for what the Latin one lacks. */
export type FontStyle = 'text' | 'strong' | 'mono';

const files: Record<FontStyle, readonly [string, string]> = {
	text: [next('latin-400'), next('latin-ext-400')],
	strong: [next('latin-700'), next('latin-ext-700')],
	mono: [mono('latin-400'), mono('latin-ext-400')],
};

function next(cut: string): string {
	return `@fontsource/atkinson-hyperlegible-next/files/atkinson-hyperlegible-next-${cut}-normal.woff`;
}

function mono(cut: string): string {
	return `@fontsource/atkinson-hyperlegible-mono/files/atkinson-hyperlegible-mono-${cut}-normal.woff`;
}

const require = createRequire(import.meta.url);
const bytes = new Map<string, Buffer>();

/** Registers every font with a document, under "text", "text-ext" and so on. */
export function registerFonts(doc: PDFKit.PDFDocument): void {
	for (const [style, [latin, extension]] of Object.entries(files)) {
		doc.registerFont(style, bytesOf(latin));
		doc.registerFont(`${style}-ext`, bytesOf(extension));
	}
}

function bytesOf(file: string): Buffer {
	const known = bytes.get(file);
	if (known) return known;
	const read = readFileSync(require.resolve(file));
	bytes.set(file, read);
	return read;
}
