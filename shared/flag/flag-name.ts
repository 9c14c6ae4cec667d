import type { Characteristic } from '../tolerance/sheet-schema.ts';

const kindWords: Record<Characteristic, string> = { plan: 'in plan', level: 'level', face: 'faces' };

/** "C/3, ground, faces": what of which element. */
export function flagTitle({ title, mark, kind }: { title: string; mark: string; kind: Characteristic }): string {
	return `${title || mark}, ${kindWords[kind]}`;
}

/** "flag 31, C/3, ground, faces". */
export function flagName(flag: { number: number; title: string; mark: string; kind: Characteristic }): string {
	return `flag ${flag.number}, ${flagTitle(flag)}`;
}
