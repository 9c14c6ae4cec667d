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

/** The file's bytes with FILE_SCHEMA rewritten to a name of the engine's; all other bytes stay where they are. */
export function withSchemaName(bytes: Uint8Array, span: readonly [number, number], engineName: string): Uint8Array {
	const statement = new TextEncoder().encode(`FILE_SCHEMA(('${engineName}'))`);
	const out = new Uint8Array(bytes.length - (span[1] - span[0]) + statement.length);
	out.set(bytes.subarray(0, span[0]), 0);
	out.set(statement, span[0]);
	out.set(bytes.subarray(span[1]), span[0] + statement.length);
	return out;
}
