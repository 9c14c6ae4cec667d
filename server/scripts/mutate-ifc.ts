/** Damage done to real model files, the same at every run for the same random numbers: what a reader must survive. */

type Random = () => number;

const below = (random: Random, count: number): number => Math.floor(random() * count);
const pick = <T>(random: Random, list: readonly T[]): T => list[below(random, list.length)]!;

const ABSURD = [
	'1e300',
	'-1.E300',
	'1.E-300',
	'0.',
	'-0.',
	'NaN',
	'1e999',
	'-1.',
	'99999999999999999999999',
	'4294967296',
	'2147483648',
	'1e8',
	'.',
	'1.E',
	'$',
	'*',
	"''",
	'()',
	'.T.',
	'#0',
];

/** Text is handled as Latin letters: one character a byte, so that any byte comes through. */
const textOf = (bytes: Uint8Array): string => Buffer.from(bytes.buffer, bytes.byteOffset, bytes.byteLength).toString('latin1');
const bytesOf = (text: string): Uint8Array => new Uint8Array(Buffer.from(text, 'latin1'));

/** Replaces one of the places a pattern matches; the text as it was where there is none. */
function replaceOne(random: Random, text: string, pattern: RegExp, by: (found: RegExpExecArray) => string): string {
	// From a random place on, so that no list of all matches is needed.
	pattern.lastIndex = below(random, text.length);
	let found = pattern.exec(text);
	if (!found) {
		pattern.lastIndex = 0;
		found = pattern.exec(text);
	}
	return found ? text.slice(0, found.index) + by(found) + text.slice(found.index + found[0].length) : text;
}

const statementsOf = (text: string): string[] => text.split(/(?<=;)/);

/** An entity refers to itself, or to one that refers to it. */
function circle(random: Random, text: string): string {
	const statements = statementsOf(text);
	const at = below(random, statements.length);
	for (let i = 0; i < statements.length; i++) {
		const here = (at + i) % statements.length;
		const own = /^\s*#(\d+)\s*=/.exec(statements[here]!)?.[1];
		const refs = statements[here]!.match(/#\d+/g)?.slice(1) ?? [];
		if (own === undefined || refs.length === 0) continue;
		const target = pick(random, refs);
		if (random() < 0.4) statements[here] = statements[here]!.replace(new RegExp(`(=.*)${target}\\b`, 's'), `$1#${own}`);
		else {
			// What it refers to is made to refer back.
			const other = statements.findIndex((statement) => new RegExp(`^\\s*${target}\\s*=`).test(statement));
			if (other < 0) continue;
			const inside = statements[other]!.match(/#\d+/g)?.slice(1) ?? [];
			if (inside.length === 0) continue;
			statements[other] = statements[other]!.replace(new RegExp(`(=.*)${pick(random, inside)}\\b`, 's'), `$1#${own}`);
		}
		break;
	}
	return statements.join('');
}

/** Each kind of damage by name. */
export const DAMAGES: Readonly<Record<string, (random: Random, bytes: Uint8Array) => Uint8Array>> = {
	flip: (random, bytes) => {
		const out = bytes.slice();
		for (let i = below(random, 20); i >= 0 && out.length > 0; i--)
			out[below(random, out.length)] = random() < 0.5 ? below(random, 256) : "'();,#=$*./\\0 9E-"[below(random, 17)]!.charCodeAt(0);
		return out;
	},
	cut: (random, bytes) => bytes.slice(0, below(random, bytes.length)),
	'cut and closed': (random, bytes) => {
		const text = textOf(bytes);
		const at = text.indexOf(';', below(random, text.length)) + 1;
		return bytesOf(`${text.slice(0, at)}\nENDSEC;\nEND-ISO-10303-21;\n`);
	},
	'piece taken out': (random, bytes) => {
		const from = below(random, bytes.length);
		const out = new Uint8Array(bytes.length);
		const to = Math.min(bytes.length, from + 1 + below(random, 400));
		out.set(bytes.subarray(0, from));
		out.set(bytes.subarray(to), from);
		return out.subarray(0, bytes.length - (to - from));
	},
	'piece repeated': (random, bytes) => {
		const text = textOf(bytes);
		const from = below(random, text.length);
		const piece = text.slice(from, from + 1 + below(random, 300));
		return bytesOf(text.slice(0, from) + piece.repeat(1 + below(random, random() < 0.1 ? 300 : 5)) + text.slice(from));
	},
	'lines repeated': (random, bytes) => {
		const statements = statementsOf(textOf(bytes));
		const at = below(random, statements.length);
		const piece = statements.slice(at, at + 1 + below(random, 6));
		for (let i = below(random, 3); i >= 0; i--) statements.splice(below(random, statements.length), 0, ...piece);
		return bytesOf(statements.join(''));
	},
	'lines taken out': (random, bytes) => {
		const statements = statementsOf(textOf(bytes));
		for (let i = below(random, 5); i >= 0; i--) statements.splice(below(random, statements.length), 1);
		return bytesOf(statements.join(''));
	},
	circle: (random, bytes) => bytesOf(circle(random, textOf(bytes))),
	'absurd numbers': (random, bytes) => {
		let text = textOf(bytes);
		for (let i = below(random, 4); i >= 0; i--)
			text = replaceOne(random, text, /(?<=[(,\s])-?\d+\.?\d*(?:E[-+]?\d+)?(?=[),\s])/g, () => pick(random, ABSURD));
		return bytesOf(text);
	},
	'another reference': (random, bytes) => {
		let text = textOf(bytes);
		const numbers = text.match(/#\d+(?=\s*=)/g) ?? ['#1'];
		for (let i = below(random, 4); i >= 0; i--)
			text = replaceOne(random, text, /#\d+(?=[),\s])/g, () => (random() < 0.15 ? pick(random, ABSURD) : pick(random, numbers)));
		return bytesOf(text);
	},
	'another kind': (random, bytes) => {
		const text = textOf(bytes);
		const kinds = text.match(/(?<==\s*)IFC[A-Z0-9]+/g) ?? ['IFCWALL'];
		return bytesOf(replaceOne(random, text, /(?<==\s*)IFC[A-Z0-9]+/g, () => pick(random, kinds)));
	},
	'arguments moved': (random, bytes) =>
		bytesOf(replaceOne(random, textOf(bytes), /,/g, () => pick(random, [',,', '', ',$,', '(', ')', '),(', ',*', ",'", ',/*']))),
};

/** One file damaged in one to three ways; `how` says which. */
export function mutateIfc(random: Random, bytes: Uint8Array): { bytes: Uint8Array; how: string } {
	const names: string[] = [];
	let out = bytes;
	const times = 1 + (random() < 0.35 ? 1 : 0) + (random() < 0.1 ? 1 : 0);
	for (let i = 0; i < times; i++) {
		const name = pick(random, Object.keys(DAMAGES));
		names.push(name);
		out = DAMAGES[name]!(random, out);
	}
	return { bytes: out, how: names.join(' + ') };
}
