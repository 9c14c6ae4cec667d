import type { InferContractRouterInputs } from '@orpc/contract';
import { eq, max } from 'drizzle-orm';
import { computeFit } from '#shared/fit/compute-fit.ts';
import type { FitDetail, fitContract } from '#shared/fit/contract.ts';
import type { FitInput, FitRefusal } from '#shared/fit/fit-schema.ts';
import { readFitInput } from '#shared/fit/read-fit-input.ts';
import { shelvedInput } from '#shared/fit/shelved-input.ts';
import { sha256OfJson } from '#shared/record/sha256.ts';
import { lockSite } from '../../db/lock-site.ts';
import { fits } from '../../db/schema/fit.ts';
import { audit } from '../../platform/audit.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { fitOf } from './queries.ts';
import { setupPairs } from './setup-pairs.ts';
import { expectShelves, withoutLoose } from './stored-pairs.ts';

type MakeFit = InferContractRouterInputs<typeof fitContract>['make'];

/**
 * Computes and stores a fit of a set-up on a control set. What the browser has seen is not taken: pairs are read anew, and the hash
 * over all that went in says what they were. Pairs that no shelf names are in the fit.
 */
export async function makeFit(
	platform: Platform,
	member: Member,
	{ setupId, controlSetId, kind, knownScale, shelves, relabellings = [] }: MakeFit,
): Promise<{ ok: true; fit: FitDetail } | { ok: false; refusal: FitRefusal }> {
	const { siteId } = member;
	const { pairs, setupName, surveyFileSha256, controlFileSha256 } = await setupPairs(platform.db, {
		siteId,
		setupId,
		controlSetId,
		relabellings,
	});
	expectShelves(pairs, shelves);
	const asked = shelvedInput(pairs.pairs, kind, knownScale, shelves);
	const partial = partialInFree(asked);
	if (partial !== null) return { ok: false, refusal: partial };
	const read = readFitInput(asked);
	if (!read.ok) return read;
	const outcome = computeFit(read.input);
	if (!outcome.ok) return outcome;
	// By content, not by our ids: whoever has the same files comes to the same hash.
	const inputsSha256 = await sha256OfJson({
		surveyFileSha256,
		setupName,
		controlFileSha256,
		shelves,
		...(relabellings.length > 0 ? { relabellings } : {}),
		fitInput: asked,
	});
	const fitId = platform.newId();
	await platform.transaction(async (tx) => {
		await lockSite(tx, siteId);
		const [row] = await tx
			.select({ highest: max(fits.number) })
			.from(fits)
			.where(eq(fits.siteId, siteId));
		const number = (row?.highest ?? 0) + 1;
		await tx.insert(fits).values({
			id: fitId,
			siteId,
			number,
			setupId,
			controlSetId,
			kind,
			knownScale,
			shelves: [...shelves],
			relabellings: [...relabellings],
			pairs: withoutLoose(pairs),
			result: outcome.result,
			inputsSha256,
			state: 'made',
			madeBy: member.userId,
			madeAt: platform.now(),
		});
		await audit(tx, member, { kind: 'fit-made', subjectId: fitId, data: { number, setupId, controlSetId, kind, inputsSha256 } });
	});
	return { ok: true, fit: await fitOf(platform.db, siteId, fitId) };
}

/** A free fit needs all three coordinates of every control point; the engine's own refusal would name a path, not the mark. */
function partialInFree({ fit, pairs }: FitInput): FitRefusal | null {
	if (fit !== 'free' && fit !== 'free-scaled') return null;
	const partial = pairs.find(({ control }) => control.includes(null));
	if (partial === undefined) return null;
	const lacking = partial.control[2] === null ? 'no level' : 'no plan position';
	return {
		code: 'bad-input',
		message: `“${partial.name}” has ${lacking}; a free fit needs all three coordinates. Set it aside.`,
		where: partial.name,
	};
}
