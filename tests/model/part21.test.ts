import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { openPart21, type Part21File } from '#shared/model/part21.ts';
import { decodePart21String } from '#shared/model/part21-text.ts';
import { numbersOf, type Part21Value } from '#shared/model/part21-value.ts';

const bytesOf = (text: string): Uint8Array => new TextEncoder().encode(text);
const wrap = (data: string): string =>
	`ISO-10303-21;\nHEADER;\nFILE_SCHEMA(('IFC4'));\nENDSEC;\nDATA;\n${data}\nENDSEC;\nEND-ISO-10303-21;\n`;

function open(text: string | Uint8Array): Part21File {
	const opened = openPart21(typeof text === 'string' ? bytesOf(text) : text);
	if (!opened.ok) throw new Error(opened.refusal.message);
	return opened.file;
}

/** Writes text as the standard's escapes, by its own rules: no code shared with the reader. */
function encode(text: string): string {
	let out = '';
	for (const character of text) {
		const code = character.codePointAt(0)!;
		if (character === "'") out += "''";
		else if (character === '\\') out += '\\\\';
		else if (code >= 32 && code <= 126) out += character;
		else if (code > 0xffff) out += `\\X4\\${code.toString(16).toUpperCase().padStart(8, '0')}\\X0\\`;
		else if (code > 0xff) out += `\\X2\\${code.toString(16).toUpperCase().padStart(4, '0')}\\X0\\`;
		else if (code >= 160) out += `\\S\\${code === 0xa7 ? "''" : String.fromCharCode(code - 128)}`;
		else out += `\\X\\${code.toString(16).toUpperCase().padStart(2, '0')}`;
	}
	return out;
}

const leaf = fc.oneof(
	fc.constant({ value: null as Part21Value, text: '$' }),
	fc.constant({ value: null as Part21Value, text: '*' }),
	fc.integer({ min: -1e9, max: 1e9 }).map((value) => ({ value: value as Part21Value, text: String(value) })),
	fc
		.double({ noNaN: true, noDefaultInfinity: true })
		.map((value) => ({ value: (value === 0 ? 0 : value) as Part21Value, text: value === 0 ? '0.' : String(value).toUpperCase() })),
	fc.string({ unit: 'binary' }).map((value) => ({ value: value as Part21Value, text: `'${encode(value)}'` })),
	fc.integer({ min: 1, max: 1e9 }).map((ref) => ({ value: { ref } as Part21Value, text: `#${ref}` })),
	fc.constantFrom('MILLI', 'T', 'LENGTHUNIT').map((name) => ({ value: { name } as Part21Value, text: `.${name}.` })),
	fc
		.double({ noNaN: true, noDefaultInfinity: true, min: 0.001, max: 1e6 })
		.map((of) => ({ value: { type: 'IFCLENGTHMEASURE', of: [of] } as Part21Value, text: `IFCLENGTHMEASURE(${of})` })),
);
const tree = fc.letrec<{ node: { value: Part21Value; text: string } }>((tie) => ({
	node: fc.oneof(
		{ depthSize: 'small', withCrossShrink: true },
		leaf,
		fc
			.array(tie('node'), { maxLength: 5 })
			.map((members) => ({ value: members.map(({ value }) => value), text: `(${members.map(({ text }) => text).join(',')})` })),
	),
})).node;
const blank = fc.constantFrom('', ' ', '\n', '\r\n', '\t', "/* a comment; with (signs) and 'quotes */", '/***/');

describe('a Part 21 file', () => {
	it('gives back any arguments, wherever blanks and comments stand', () => {
		fc.assert(
			fc.property(fc.array(tree, { minLength: 1, maxLength: 6 }), blank, blank, blank, (args, a, b, c) => {
				const file = open(wrap(`#${a}7${b}=${c}IFCTHING${a}(${args.map(({ text }) => `${b}${text}${c}`).join(',')})${a};`));
				expect(file.entity(7)).toEqual({ number: 7, type: 'IFCTHING', args: args.map(({ value }) => value) });
			}),
			{ numRuns: 300 },
		);
	});

	it('gives back any text through every kind of escape', () => {
		fc.assert(
			fc.property(fc.string({ unit: 'binary', maxLength: 60 }), (text) => decodePart21String(encode(text)) === text),
			{ numRuns: 500 },
		);
	});

	it('decodes the examples of the standard and keeps broken escapes as they stand', () => {
		expect(decodePart21String('\\X2\\0391\\X0\\')).toBe('Α');
		expect(decodePart21String('\\X4\\0001F600\\X0\\')).toBe('😀');
		expect(decodePart21String('\\PE\\\\S\\*')).toBe('Њ');
		expect(decodePart21String('St\\S\\|tze')).toBe('Stütze');
		expect(decodePart21String("\\S\\'' 5")).toBe('§ 5');
		expect(decodePart21String('\\X\\C3\\X96 and \\X2\\00')).toBe('Ã\\X96 and \\X2\\00');
	});

	it('reads raw ISO 8859-1 bytes as what was meant, and leaves UTF-8 alone', () => {
		const bytes = new Uint8Array([...bytesOf(wrap("#1=A('Stra@e');"))].map((byte) => (byte === 64 ? 0xdf : byte)));
		expect(open(bytes).entity(1)?.args).toEqual(['Straße']);
		expect(open(wrap("#1=A('Straße');")).entity(1)?.args).toEqual(['Straße']);
	});

	it('finds every entity among many in any order; of equal numbers the last', () => {
		fc.assert(
			fc.property(fc.array(fc.tuple(fc.integer({ min: 1, max: 60 }), fc.constantFrom('A', 'B', 'C')), { maxLength: 80 }), (entities) => {
				const file = open(wrap(entities.map(([number, type], at) => `#${number}=${type}(${at});`).join('')));
				const last = new Map(entities.map(([number, type], at) => [number, { number, type, args: [at] }]));
				for (let number = 0; number <= 61; number++) expect(file.entity(number)).toEqual(last.get(number) ?? null);
				const wanted = [...last.values()].filter(({ type }) => type !== 'B').map(({ number }) => number);
				expect(file.ofType('A', 'C').sort((a, b) => a - b)).toEqual(wanted.sort((a, b) => a - b));
				expect(new Set(file.repeatedNumbers)).toEqual(
					new Set([...last.keys()].filter((number) => entities.filter(([other]) => other === number).length > 1)),
				);
			}),
		);
	});

	it('says where a file is cut, wherever it is cut', () => {
		const whole = wrap("#1=A('x; (y',#2);\n/* c */#2=B((1.,2.),$);");
		fc.assert(
			fc.property(fc.integer({ min: whole.indexOf('DATA;') + 5, max: whole.lastIndexOf('ENDSEC;') + 6 }), (length) => {
				const opened = openPart21(bytesOf(whole.slice(0, length)));
				expect(opened.ok ? 'read' : opened.refusal.code).toBe('cut-file');
			}),
		);
	});

	it('never throws and always answers, whatever the bytes', () => {
		fc.assert(
			fc.property(
				fc.oneof(
					fc.uint8Array({ maxLength: 300 }),
					fc.string({ maxLength: 200 }).map((text) => bytesOf(wrap(text))),
				),
				(bytes) => {
					const opened = openPart21(bytes);
					if (opened.ok) for (const number of opened.file.ofType('A', '')) opened.file.entity(number);
					else expect(opened.refusal.message.length).toBeGreaterThan(10);
				},
			),
			{ numRuns: 500 },
		);
	});

	it('is not thrown off by a text of 70 000 signs or by a hundred thousand brackets', () => {
		const name = 'n'.repeat(70_000);
		const file = open(wrap(`#1=A('${name}',#2,'it''s');#2=B(${'('.repeat(100_000)}1${')'.repeat(100_000)});#3=C(3.);`));
		expect(file.entity(1)?.args).toEqual([name, { ref: 2 }, "it's"]);
		expect(file.longTexts).toHaveLength(1);
		expect(file.entity(2)?.args).toHaveLength(1);
		expect(numbersOf([...(file.entity(3)?.args ?? [])])).toEqual([3]);
	});

	it.each([
		['open brackets', '('],
		['unclosed escapes', '\\X2\\00'],
		['comments', '/**/'],
		['quotes', "''"],
	])('takes no more than linear time over %s', (_name, piece) => {
		const timeOf = (times: number): number => {
			const bytes = bytesOf(
				wrap(
					`#1=A('${piece.includes("'") || piece === '(' || piece === '/**/' ? `'${piece === "''" ? `,'` : ','}` : ''}${piece.repeat(times)}');`,
				),
			);
			// Processor time: a busy machine proves nothing.
			const from = process.cpuUsage().user;
			const opened = openPart21(bytes);
			if (opened.ok) opened.file.entity(1);
			return (process.cpuUsage().user - from) / 1000;
		};
		timeOf(1000);
		// A million pieces: quadratic time would be hours.
		expect(timeOf(1_000_000)).toBeLessThan(5000);
	});
});
