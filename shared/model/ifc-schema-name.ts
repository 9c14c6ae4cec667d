import type { Part21File } from './part21.ts';

/** Which IFC schema a file means by the name it writes, and the name that the geometry engine opens. */
export type SchemaName = {
	written: string;
	engineName: 'IFC2X3' | 'IFC4' | 'IFC4X1' | 'IFC4X2' | 'IFC4X3' | 'IFC4X3_ADD2';
	isAlias: boolean;
};

const OPENS_AS_WRITTEN = /^(IFC2X3|IFC4|IFC4X1|IFC4X2|IFC4X3|IFC4X3_RC[1-4]|IFC4X3_ADD1|IFC4X3_ADD2)$/;

/**
 * Reads FILE_SCHEMA. Names with an addendum or corrigendum (IFC2X3_FINAL, IFC2X3_TC1, IFC4_ADD2_TC1 …) mean the same entities as the
 * plain name. Null with a reason where there is none or it is another schema.
 */
export function readSchemaName(file: Part21File): { ok: true; schema: SchemaName } | { ok: false; message: string } {
	const written = file.schemas.find((name) => name.startsWith('IFC')) ?? file.schemas[0];
	if (!written)
		return {
			ok: false,
			message: 'The file does not name its schema (FILE_SCHEMA is missing or empty in the header): it cannot be told how to read it.',
		};
	const plain = written.replace(/\s.*$/, '');
	if (OPENS_AS_WRITTEN.test(plain))
		return { ok: true, schema: { written, engineName: plain as SchemaName['engineName'], isAlias: plain !== written } };
	const base = /^IFC2X3_/.test(plain) ? 'IFC2X3' : /^IFC4_/.test(plain) ? 'IFC4' : /^IFC4X3_/.test(plain) ? 'IFC4X3_ADD2' : null;
	if (base) return { ok: true, schema: { written, engineName: base, isAlias: true } };
	return {
		ok: false,
		message: written.startsWith('IFC')
			? `The file is written in ${written}. IFC2X3, IFC4 and IFC4X3 are read: export it in one of these.`
			: `The file is a STEP file of the schema ${written}, not IFC. IFC2X3, IFC4 and IFC4X3 are read.`,
	};
}

/**
 * The bytes for the geometry engine: FILE_SCHEMA rewritten to a name it opens where the file writes another, and texts that are too long for
 * it emptied. The same bytes where neither is needed. Nothing else moves.
 */
export function bytesForEngine(bytes: Uint8Array, file: Part21File, schema: SchemaName): Uint8Array {
	const patches: { start: number; end: number; text: Uint8Array }[] = file.longTexts.map(([start, end]) => ({
		start,
		end,
		text: new Uint8Array(0),
	}));
	if (schema.isAlias && file.schemaSpan !== null)
		patches.push({
			start: file.schemaSpan[0],
			end: file.schemaSpan[1],
			text: new TextEncoder().encode(`FILE_SCHEMA(('${schema.engineName}'))`),
		});
	if (patches.length === 0) return bytes;
	patches.sort((a, b) => a.start - b.start);
	const out = new Uint8Array(bytes.length + patches.reduce((sum, { start, end, text }) => sum + text.length - (end - start), 0));
	let from = 0;
	let at = 0;
	for (const { start, end, text } of patches) {
		// A long text inside the header statement that is rewritten as a whole.
		if (start < from) continue;
		out.set(bytes.subarray(from, start), at);
		at += start - from;
		out.set(text, at);
		at += text.length;
		from = end;
	}
	out.set(bytes.subarray(from), at);
	return out.subarray(0, at + bytes.length - from);
}
