import type { FitObservations } from './fit-observations.ts';
import type { Finding } from './fit-schema.ts';

/** With no σ a fit takes heights to be as good as plan. What follows from that alone is no finding. */

/** Heights may be so many times coarser than plan, or finer (common practice: tacheometric against levelled heights). */
const HEIGHT_RATIOS = [3, 1 / 3] as const;

/** The same observations with heights that many times coarser or finer than plan than their weights say. */
export function withOtherHeights(observations: FitObservations): FitObservations[] {
	return HEIGHT_RATIOS.map((ratio) => {
		const controlVariance = observations.controlVariance.slice();
		for (let at = 2; at < controlVariance.length; at += 3) controlVariance[at] = controlVariance[at]! * ratio ** 2;
		return { ...observations, controlVariance };
	});
}

/**
 * What stands whichever the ratio of the two standard deviations is within those bounds, a nuisance parameter: its least favourable value
 * decides, so the level of the tests holds for all of them (an intersection of tests, Berger 1982).
 * @param raised with all axes alike
 * @param others the same under each other ratio, of `withOtherHeights`
 */
export function standing(raised: readonly Finding[], others: readonly (readonly Finding[])[]): Finding[] {
	if (raised.length === 0 || others.some((findings) => findings.length === 0)) return [];
	const runs = [raised, ...others];
	const accused = runs.map(accusedBy);
	const always = [...(accused[0] ?? [])].filter((name) => accused.every((names) => names.has(name)));
	// Under one ratio a sound height may look off too: the run that accuses nobody but those who are off under all.
	const strictest = runs.find((_, run) => accused[run]!.size === always.length);
	if (!strictest || (always.length === 0 && accused.some((names) => names.size > 0))) return [dependsOnHeights(runs)];
	return strictest.filter(
		({ code, pairs, evidence }) =>
			pairs.length > 0 || evidence.alternatives !== undefined || runs.every((findings) => findings.some((other) => tells(other, code))),
	);
}

function accusedBy(findings: readonly Finding[]): Set<string> {
	return new Set(findings.flatMap(({ pairs }) => pairs));
}

function alternativesOf({ evidence }: Finding): { code?: string; pairs?: string[] }[] {
	return Array.isArray(evidence.alternatives) ? evidence.alternatives : [];
}

function tells(finding: Finding, code: string): boolean {
	return finding.code === code || alternativesOf(finding).some((alternative) => alternative.code === code);
}

/** Another pair is to blame under another ratio: nobody is accused. */
function dependsOnHeights(runs: readonly (readonly Finding[])[]): Finding {
	const stories = new Map<string, { code: string; pairs: string[] }>();
	for (const { code, pairs, evidence } of runs.flat()) {
		const told = alternativesOf({ code, pairs, evidence, message: '' }).flatMap((one) =>
			one.pairs ? [{ code: one.code ?? code, pairs: one.pairs }] : [],
		);
		for (const story of told.length > 0 ? told : [{ code, pairs: [...pairs] }]) stories.set(JSON.stringify(story), story);
	}
	const alternatives = [...stories.values()];
	const words = alternatives
		.slice(0, 4)
		.map(({ code, pairs }) => (pairs.length > 0 ? pairs.map((name) => `“${name}”`).join(' and ') : code));
	return {
		code: 'blunder',
		pairs: [],
		message: `The pairs contradict each other, and which of them is off depends on how good heights are beside plan: ${words.join('; or ')}. Give standard deviations, or measure again, before setting anything aside.`,
		evidence: { alternatives },
	};
}
