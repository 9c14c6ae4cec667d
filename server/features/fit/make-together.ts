import type { InferContractRouterInputs } from '@orpc/contract';
import { and, asc, eq, max } from 'drizzle-orm';
import { adjustSetups } from '#shared/fit/adjust-setups.ts';
import type { fitContract } from '#shared/fit/contract.ts';
import type { FitRefusal } from '#shared/fit/fit-schema.ts';
import { leastPairs } from '#shared/fit/least-pairs.ts';
import type { FitNetwork, NetworkFits, NetworkOutlook } from '#shared/fit/network-schema.ts';
import type { AdjustedSetups } from '#shared/fit/setup-figures.ts';
import { sha256OfJson } from '#shared/record/sha256.ts';
import type { Handle } from '../../db/database.ts';
import { lockSite } from '../../db/lock-site.ts';
import { fitNetworks, fits } from '../../db/schema/fit.ts';
import { setups } from '../../db/schema/survey.ts';
import { audit } from '../../platform/audit.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { foundOne, Refused } from '../../platform/refuse.ts';
import { networkInput, tiesOf } from './network-input.ts';
import { madeTogether } from './queries.ts';
import { setupPairs } from './setup-pairs.ts';
import { expectShelves, withoutLoose } from './stored-pairs.ts';

type Inputs = InferContractRouterInputs<typeof fitContract>;

/** Which set-ups of a survey are tied through which targets, and whether they can be adjusted together. */
export async function fitTies(db: Handle, { siteId, surveyId, controlSetId }: Inputs['ties']): Promise<NetworkOutlook> {
	const rows = await db
		.select({ setupId: setups.id })
		.from(setups)
		.where(and(eq(setups.siteId, siteId), eq(setups.surveyId, surveyId)))
		.orderBy(asc(setups.name));
	foundOne(rows.slice(0, 1));
	const read = [];
	for (const { setupId } of rows) read.push(await setupPairs(db, { siteId, setupId, controlSetId }));
	const ties = tiesOf(read);
	return {
		setups: read.map(({ pairs, setupName, levelling }) => ({
			setupId: pairs.setupId,
			name: setupName,
			levelling,
			knownCount: pairs.pairs.length,
			tieCount: ties.filter(({ isKnown, setupIds }) => !isKnown && setupIds.includes(pairs.setupId)).length,
			standsAlone: pairs.pairs.length >= leastPairs(levelling),
		})),
		ties,
		whyNot: whyNotTogether(read, ties),
	};
}

function whyNotTogether(read: readonly Awaited<ReturnType<typeof setupPairs>>[], ties: NetworkOutlook['ties']): string | null {
	if (read.length < 2) return 'There is one set-up only.';
	if (ties.length === 0)
		return 'No two set-ups saw the same target. Targets that tie are named alike and coded CP, BM, TP, BS, CHK or TGT.';
	const unscaled = read.find(({ bringsScale }) => !bringsScale);
	if (unscaled) return `Set-up ${unscaled.setupName} brings no scale of its own; only set-ups that do are adjusted together.`;
	const unweighted = read.find(({ pairs }) => pairs.sigmaNote !== null);
	if (unweighted) return `Set-up ${unweighted.setupName}: ${unweighted.pairs.sigmaNote}`;
	const blank = read.find(({ unknown }) => unknown.some(({ sigmaM }) => sigmaM === null));
	return blank
		? `Neither the survey nor set-up ${blank.setupName} gives standard deviations for its targets; adjusting together needs them.`
		: null;
}

/**
 * Adjusts set-ups of one survey together and stores a fit for each, all or none. Pairs are read anew, and one hash over all that went in
 * of all of them stands in each fit's own.
 */
export async function makeTogether(
	platform: Platform,
	member: Member,
	{ surveyId, controlSetId, setups: asked }: Inputs['makeTogether'],
): Promise<{ ok: true; together: NetworkFits } | { ok: false; refusal: FitRefusal }> {
	const { siteId } = member;
	const read: Awaited<ReturnType<typeof setupPairs>>[] = [];
	for (const [index, { setupId, shelves, relabellings = [] }] of asked.entries()) {
		const where = `setups.${index}`;
		if (asked.findIndex((one) => one.setupId === setupId) < index) throw new Refused('setup-twice', 'A set-up is named twice.', where);
		const own = await setupPairs(platform.db, { siteId, setupId, controlSetId, relabellings });
		if (own.surveyId !== surveyId) throw new Refused('other-survey', `Set-up ${own.setupName} is of another survey.`, where);
		expectShelves(own.pairs, shelves);
		read.push(own);
	}
	const fault = whyNotTogether(read, tiesOf(read));
	if (fault !== null) throw new Refused('not-tied', fault, 'setups');
	const input = networkInput(
		read,
		asked.map(({ shelves }) => shelves),
	);
	const outcome = adjustSetups(input.setups, input.known);
	if (!outcome.ok) return outcome;
	const { adjusted } = outcome;
	const inputsSha256 = await sha256OfJson({
		surveyFileSha256: read[0]!.surveyFileSha256,
		controlFileSha256: read[0]!.controlFileSha256,
		adjusted: input,
		setups: asked.map(({ shelves, relabellings = [] }, i) => ({ setupName: read[i]!.setupName, shelves, relabellings })),
	});
	const hashes = await Promise.all(read.map(({ setupName }) => sha256OfJson({ network: inputsSha256, setupName })));
	const networkId = platform.newId();
	await platform.transaction(async (tx) => {
		await lockSite(tx, siteId);
		await tx.insert(fitNetworks).values({
			id: networkId,
			siteId,
			surveyId,
			network: storedNetwork(adjusted, read),
			inputsSha256,
			madeBy: member.userId,
			madeAt: platform.now(),
		});
		const [row] = await tx
			.select({ highest: max(fits.number) })
			.from(fits)
			.where(eq(fits.siteId, siteId));
		for (const [index, { pairs, setupName, levelling }] of read.entries()) {
			const { setupId, shelves, relabellings = [] } = asked[index]!;
			const number = (row?.highest ?? 0) + 1 + index;
			const fitId = platform.newId();
			await tx.insert(fits).values({
				id: fitId,
				siteId,
				number,
				setupId,
				networkId,
				controlSetId,
				kind: levelling,
				knownScale: null,
				shelves: [...shelves],
				relabellings: [...relabellings],
				pairs: withoutLoose(pairs),
				result: adjusted.fits.find(({ setup }) => setup === setupName)!.fit,
				inputsSha256: hashes[index]!,
				state: 'made',
				madeBy: member.userId,
				madeAt: platform.now(),
			});
			const data = { number, setupId, controlSetId, kind: levelling, inputsSha256: hashes[index]!, networkId };
			await audit(tx, member, { kind: 'fit-made', subjectId: fitId, data });
		}
	});
	return { ok: true, together: (await madeTogether(platform.db, [networkId])).get(networkId)! };
}

function storedNetwork({ marks, ties, between }: AdjustedSetups, read: readonly Awaited<ReturnType<typeof setupPairs>>[]): FitNetwork {
	const idOf = new Map(read.map(({ setupName, pairs }) => [setupName, pairs.setupId]));
	return {
		ties: marks.map(({ mark, place, sigma, isKnown }) => {
			const own = ties.filter((tie) => tie.mark === mark);
			return {
				mark,
				isKnown,
				setupIds: own.map(({ setup }) => idOf.get(setup)!),
				place: [...place],
				sigma: [...sigma],
				sightings: own.map(({ setup, residual, normalised }) => ({ setupId: idOf.get(setup)!, residual, normalised })),
			};
		}),
		between: between.map(({ a, b, covariance }) => ({ a: idOf.get(a)!, b: idOf.get(b)!, covariance })),
	};
}
