import type { Characteristic, RuleMatch, Stage } from '#shared/tolerance/sheet-schema.ts';

/** What a rule can be about, as a person chooses it. */
export const characteristicLabels: Readonly<Record<NonNullable<RuleMatch['characteristic']>, string>> = {
	plan: 'Place in plan',
	level: 'Level',
	face: 'Faces',
	plumb: 'Plumb',
	section: 'Section',
	flatness: 'Flatness under a straightedge',
	'flatness-best-fit': 'Flatness about the best-fit plane',
	'bolt-distance': 'Distances within a group',
	'group-shift': 'Shift of a group',
	'group-turn': 'Turn of a group',
	projection: 'Projection over the concrete',
};

const placed: ReadonlySet<string> = new Set<Characteristic>(['plan', 'level', 'face']);

/** Whether it is reckoned from several checkpoints and not one of its own. */
export function isDerived(characteristic: string): boolean {
	return characteristic in characteristicLabels && !placed.has(characteristic);
}

export const stageLabels: Readonly<Record<Stage, string>> = {
	'before-pour': 'Before the pour',
	'as-cast-shored': 'As cast, shored',
	'as-cast': 'As cast',
	later: 'Later',
};

export const referenceLabels = {
	frame: 'The site’s frame',
	grid: 'The grid',
	below: 'The one below, as built',
	group: 'Its group',
	'best-fit': 'A best fit',
} as const;

/** A record of labels as the options of a list, "any" first. */
export function optionsOf(labels: Readonly<Record<string, string>>, any: string): { value: string; label: string }[] {
	return [{ value: '', label: any }, ...Object.entries(labels).map(([value, label]) => ({ value, label }))];
}
