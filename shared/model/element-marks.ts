import type { Vector3 } from '../geometry/frame.ts';
import type { GridAxis } from './model-schema.ts';
import type { ElementKind } from './place-checkpoints.ts';

/** Short names for the field and long ones for people, from the grid and the storeys. */

export type MarkInput = {
	kind: ElementKind;
	class: string;
	name: string;
	tag: string;
	storey: string;
	/** Middle of the element in plan, and the lower left and upper right corners of its box; null without geometry. */
	middleM: Vector3 | null;
	minM: Vector3 | null;
	maxM: Vector3 | null;
};

/** At most so long, so that a checkpoint's part (".NE12") still fits in the sixteen characters of a field controller. */
const LONGEST = 10;

const clean = (text: string): string =>
	text
		.toUpperCase()
		.replace(/[ÄÖÜ]/g, (c) => ({ Ä: 'AE', Ö: 'OE', Ü: 'UE' })[c] ?? c)
		.replace(/[^A-Z0-9]+/g, '');

/** A storey's name in one to three letters or digits: Ground → G, Level 2 → 2, Basement 1 → B1, Roof → R. */
export function storeyCode(name: string): string {
	if (name.trim() === '') return '';
	const number = /-?\d+/.exec(name)?.[0];
	const digits = number === undefined ? '' : String(Math.abs(Number(number))).slice(0, 3);
	if (/basement|keller|untergeschoss|\bug\b|sous-sol/i.test(name)) return `B${digits}`;
	if (/ground|erdgeschoss|^eg\b|rez-de|begane/i.test(name)) return 'G';
	if (/roof|dach|toit/i.test(name)) return `R${digits}`;
	if (number !== undefined) return number.startsWith('-') && /(^|\s)-\d/.test(name) ? `B${digits}` : digits;
	return clean(name).slice(0, 3);
}

/** A storey's name inside a title: "Ground" → "ground"; names that are no plain English words stay. */
const storeyInTitle = (name: string): string =>
	/^(ground|level|roof|basement|first|second|third|fourth|fifth|floor|foundation|storey|story)\b/i.test(name)
		? name[0]!.toLowerCase() + name.slice(1)
		: name;

/** Distance of a plan point from an axis, metres. Its end pieces are prolonged: a column just beyond the drawn end is still on the axis. */
function distanceTo(axis: GridAxis, x: number, y: number): number {
	let best = Infinity;
	const last = axis.points.length - 2;
	for (let i = 0; i <= last; i++) {
		const [ax, ay] = axis.points[i]!;
		const [bx, by] = axis.points[i + 1]!;
		const dx = bx - ax;
		const dy = by - ay;
		const size = dx * dx + dy * dy;
		if (size < 1e-12) continue;
		let t = ((x - ax) * dx + (y - ay) * dy) / size;
		if (t < 0 && i > 0) t = 0;
		if (t > 1 && i < last) t = 1;
		best = Math.min(best, Math.hypot(x - ax - t * dx, y - ay - t * dy));
	}
	return best;
}

type Spot = { letter: GridAxis; digit: GridAxis; farM: number };

const isDigitTag = (axis: GridAxis): boolean => /^\d/.test(axis.tag);

/** The nearest crossing of two axes of different directions: the one with letters first. */
function spotOf(grid: readonly GridAxis[], x: number, y: number): Spot | null {
	const near = (direction: GridAxis['direction']): { axis: GridAxis; farM: number } | null => {
		let best: { axis: GridAxis; farM: number } | null = null;
		for (const axis of grid) {
			if (axis.direction !== direction || axis.tag === '') continue;
			const farM = distanceTo(axis, x, y);
			if (!best || farM < best.farM - 1e-6) best = { axis, farM };
		}
		return best;
	};
	const u = near('u');
	const v = near('v');
	if (!u || !v) return null;
	const farM = Math.max(u.farM, v.farM);
	return isDigitTag(u.axis) && !isDigitTag(v.axis) ? { letter: v.axis, digit: u.axis, farM } : { letter: u.axis, digit: v.axis, farM };
}

/** The axis a long element runs along, and the first and last crossing axes it reaches; null where it follows none. */
function runOf(grid: readonly GridAxis[], input: MarkInput): { along: GridAxis; from: GridAxis; to: GridAxis } | null {
	const { minM: min, maxM: max } = input;
	if (!min || !max) return null;
	const isAlongX = max[0] - min[0] >= max[1] - min[1];
	const [mx, my] = [(min[0] + max[0]) / 2, (min[1] + max[1]) / 2];
	const ends: [number, number][] = isAlongX
		? [
				[min[0], my],
				[max[0], my],
			]
		: [
				[mx, min[1]],
				[mx, max[1]],
			];
	const isLong = Math.max(max[0] - min[0], max[1] - min[1]) > 2.5 * Math.min(max[0] - min[0], max[1] - min[1]);
	if (!isLong) return null;
	const reach = (axis: GridAxis): number => Math.max(...ends.map(([x, y]) => distanceTo(axis, x, y)));
	const along = grid.filter((axis) => axis.tag !== '').sort((a, b) => reach(a) - reach(b))[0];
	if (!along || reach(along) > 1) return null;
	const crossing = grid.filter((axis) => axis.direction !== along.direction && axis.tag !== '');
	const nearest = ([x, y]: [number, number]): GridAxis | undefined =>
		[...crossing].sort((a, b) => distanceTo(a, x, y) - distanceTo(b, x, y))[0];
	const [from, to] = ends.map(nearest);
	if (!from || !to) return null;
	const isForward = from.tag.localeCompare(to.tag, 'en', { numeric: true }) <= 0;
	return { along, from: isForward ? from : to, to: isForward ? to : from };
}

const KIND_CODE: Readonly<Record<ElementKind, string>> = {
	column: 'C',
	pile: 'P',
	bolt: 'B',
	wall: 'W',
	beam: 'M',
	member: 'D',
	slab: 'S',
	footing: 'F',
	plate: 'E',
	stair: 'ST',
	none: 'X',
};
const KIND_WORD: Readonly<Record<ElementKind, string>> = {
	column: 'Column',
	pile: 'Pile',
	bolt: 'Bolt',
	wall: 'Wall',
	beam: 'Beam',
	member: 'Member',
	slab: 'Slab',
	footing: 'Footing',
	plate: 'Plate',
	stair: 'Stair',
	none: '',
};

/** The class in words, for what has no kind: IfcFlowTerminal → "Flow terminal". */
const classInWords = (className: string): string => {
	const words = className
		.replace(/^Ifc/, '')
		.replace(/([a-z0-9])([A-Z])/g, '$1 $2')
		.toLowerCase();
	return words === '' ? 'Element' : words[0]!.toUpperCase() + words.slice(1);
};

/** "Ramp" and "Roof" where the class says so, else the kind. */
const wordFor = (input: MarkInput): string =>
	input.kind === 'none'
		? classInWords(input.class)
		: /^Ifc(Ramp|Roof)/.test(input.class)
			? /^Ifc(Ramp|Roof)/.exec(input.class)![1]!
			: KIND_WORD[input.kind];

/**
 * Marks (at most 10 letters, digits, `-`, unique among the elements) and titles, in the order given. With a grid: a column at C/3 on the
 * ground floor is "C3-G", other kinds carry their letter in front ("WB2-4-G" a wall on axis B from 2 to 4); bolts and plates at the same
 * crossing are numbered west to east. Without a grid: kind and running number.
 */
export function markElements(inputs: readonly MarkInput[], grid: readonly GridAxis[]): { mark: string; title: string }[] {
	const taken = new Set<string>();
	const counts = new Map<string, number>();
	const wanted = inputs.map((input): { base: string; title: string; place: string; isOwn: boolean } => {
		const storey = storeyCode(input.storey);
		const tail = storey === '' ? '' : `-${storey}`;
		const inTitle = input.storey === '' ? '' : `, ${storeyInTitle(input.storey)}`;
		const word = wordFor(input);
		if (input.kind !== 'none' && input.middleM) {
			const run = input.kind === 'wall' || input.kind === 'beam' ? runOf(grid, input) : null;
			if (run) {
				const reach = run.from === run.to ? run.from.tag : `${run.from.tag}–${run.to.tag}`;
				return {
					base: `${KIND_CODE[input.kind]}${clean(run.along.tag)}${clean(run.from.tag)}${run.from === run.to ? '' : `-${clean(run.to.tag)}`}${tail}`,
					title: `${word} ${run.along.tag}, ${reach}${inTitle}`,
					place: '',
					isOwn: true,
				};
			}
			const spot = spotOf(grid, input.middleM[0], input.middleM[1]);
			if (spot && (spot.farM < 1.5 || input.kind !== 'slab')) {
				const place = `${spot.letter.tag}/${spot.digit.tag}`;
				const code = `${clean(spot.letter.tag)}${clean(spot.digit.tag)}`;
				const isAt = spot.farM < 0.35;
				if (input.kind === 'column' && isAt) return { base: `${code}${tail}`, title: `Column ${place}${inTitle}`, place, isOwn: true };
				return {
					base: `${KIND_CODE[input.kind]}${code}${tail}`,
					title: `${word} ${isAt || spot.farM < 1 ? '' : 'near '}${place}${inTitle}`,
					place,
					isOwn: input.kind !== 'bolt' && input.kind !== 'plate',
				};
			}
		}
		return { base: `${KIND_CODE[input.kind]}${tail}`, title: `${word}${inTitle}`, place: '', isOwn: false };
	});

	const sameBase = new Map<string, number[]>();
	wanted.forEach(({ base }, at) => {
		const group = sameBase.get(base);
		if (group) group.push(at);
		else sameBase.set(base, [at]);
	});
	const out: { mark: string; title: string }[] = new Array(inputs.length);
	for (const [base, group] of sameBase) {
		const ordered = wanted[group[0]!]!.place === '' ? group : [...group].sort((a, b) => byPlace(inputs[a]!, inputs[b]!) || a - b);
		ordered.forEach((at) => {
			const want = wanted[at]!;
			const isSingle = group.length === 1 && want.isOwn && base.length <= LONGEST;
			let mark = base;
			let number = counts.get(base) ?? 0;
			if (!isSingle || taken.has(mark)) {
				do mark = numbered(base, ++number);
				while (taken.has(mark));
				counts.set(base, number);
			}
			taken.add(mark);
			const word = wordFor(inputs[at]!);
			const isPartOfPlace = (inputs[at]!.kind === 'bolt' || inputs[at]!.kind === 'plate') && want.place !== '';
			const title = isSingle
				? want.title
				: isPartOfPlace
					? `${word} ${number} of ${want.place}${inputs[at]!.storey === '' ? '' : `, ${storeyInTitle(inputs[at]!.storey)}`}`
					: want.place === ''
						? want.title.replace(/^([^,]*)/, `$1 ${number}`)
						: `${want.title} (${number})`;
			out[at] = { mark, title };
		});
	}
	return out;
}

/** West to east, then south to north. */
function byPlace(a: MarkInput, b: MarkInput): number {
	if (!a.middleM || !b.middleM) return 0;
	const dx = a.middleM[0] - b.middleM[0];
	return Math.abs(dx) > 0.001 ? dx : a.middleM[1] - b.middleM[1];
}

/** "BC3-G" and 2 → "BC3-G-2"; "C-G" and 12 → "C12-G". Shortened from the end where it does not fit. */
function numbered(base: string, number: number): string {
	const plain = /^([A-Z]{1,2})(-.*)?$/.exec(base);
	if (plain && !/\d/.test(plain[1]!)) {
		const head = `${plain[1]}${number}`;
		return `${head}${(plain[2] ?? '').slice(0, Math.max(0, LONGEST - head.length))}`.replace(/-$/, '');
	}
	const tail = `-${number}`;
	return `${base.slice(0, LONGEST - tail.length).replace(/-$/, '')}${tail}`;
}
