import type { Relabelling, Shelving } from './contract.ts';
import type { FitKind } from './fit-schema.ts';

/** What went into a fit, as far as a person chose it. */
export interface FitChoices {
	kind: FitKind;
	/** Made together with the fits of other set-ups. */
	isTogether?: boolean;
	knownScale: number | null;
	controlNumber: number;
	shelves: readonly Shelving[];
	relabellings: readonly Relabelling[];
	/** Of all pairs that the set-up had. */
	pairNames: readonly string[];
}

const kindNames: Record<FitKind, string> = {
	height: 'height only',
	levelled: 'levelled',
	'levelled-scaled': 'levelled with a scale',
	free: 'free',
	'free-scaled': 'free with a scale',
};
const shelfNames = { 'in-the-fit': 'in the fit', 'held-back': 'held back', 'set-aside': 'set aside' } as const;
const useNames = { all: 'used whole', plan: 'used in plan only', level: 'used in level only' } as const;

/** What is other in a fit than in the one before it of the same set-up, a sentence each; none where nothing is. */
export function fitChanges(before: FitChoices, after: FitChoices): string[] {
	const changes: string[] = [];
	if (before.controlNumber !== after.controlNumber) changes.push(`Control ${before.controlNumber} → ${after.controlNumber}.`);
	if (before.kind !== after.kind) changes.push(`Fit ${kindNames[before.kind]} → ${kindNames[after.kind]}.`);
	if ((before.isTogether ?? false) !== (after.isTogether ?? false))
		changes.push(after.isTogether ? 'Adjusted together with other set-ups.' : 'No longer adjusted together with other set-ups.');
	if (before.knownScale !== after.knownScale) changes.push(`Known factor ${before.knownScale ?? 1} → ${after.knownScale ?? 1}.`);
	const had = new Set(before.pairNames);
	const has = new Set(after.pairNames);
	const gone = before.pairNames.filter((name) => !has.has(name));
	const come = after.pairNames.filter((name) => !had.has(name));
	if (come.length > 0) changes.push(`New ${come.length === 1 ? 'pair' : 'pairs'} ${come.join(', ')}.`);
	if (gone.length > 0) changes.push(`${gone.join(', ')} no longer paired.`);
	const earlier = new Map(before.shelves.map((shelving) => [shelving.name, shelving]));
	const later = new Map(after.shelves.map((shelving) => [shelving.name, shelving]));
	for (const name of after.pairNames) {
		const said = had.has(name) ? pairChange(name, earlier.get(name), later.get(name)) : null;
		if (said) changes.push(said);
	}
	const labelled = new Set(before.relabellings.map(labelKey));
	const relabelled = new Set(after.relabellings.map(labelKey));
	for (const one of after.relabellings)
		if (!labelled.has(labelKey(one))) changes.push(`Target ${one.target} taken for ${one.mark}: ${one.reason}`);
	for (const one of before.relabellings)
		if (!relabelled.has(labelKey(one))) changes.push(`Target ${one.target} no longer taken for ${one.mark}.`);
	return changes;
}

function pairChange(name: string, before: Shelving | undefined, after: Shelving | undefined): string | null {
	const [was, is] = [before?.shelf ?? 'in-the-fit', after?.shelf ?? 'in-the-fit'];
	const [used, uses] = [before?.use ?? 'all', after?.use ?? 'all'];
	const [exchanged, exchange] = [before?.exchangedWith ?? null, after?.exchangedWith ?? null];
	const parts = [
		was !== is && shelfNames[is],
		used !== uses && useNames[uses],
		exchanged !== exchange && (exchange === null ? `its own label again` : `exchanged with ${exchange}`),
	].filter((part) => part !== false);
	if (parts.length === 0) return null;
	return `${name} ${parts.join(', ')}${after?.reason ? `: ${after.reason}` : ''}${/[.?!]$/.test(after?.reason ?? '') ? '' : '.'}`;
}

function labelKey({ target, mark }: Relabelling): string {
	return JSON.stringify([target, mark]);
}
