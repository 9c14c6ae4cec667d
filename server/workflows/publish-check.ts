import { and, eq, inArray, isNull } from 'drizzle-orm';
import type { PublishPlan } from '#shared/check/contract.ts';
import { sha256OfJson } from '#shared/record/sha256.ts';
import type { Handle, Transaction } from '../db/database.ts';
import { lockSite } from '../db/lock-site.ts';
import { checkFits } from '../db/schema/check.ts';
import { fits } from '../db/schema/fit.ts';
import { companies, sites } from '../db/schema/site.ts';
import { setups } from '../db/schema/survey.ts';
import { checkOf, publishCheck, rememberPublishing, whyNotPublished } from '../features/check/publish-check.ts';
import { applyFlagChanges } from '../features/flag/apply-flag-changes.ts';
import { flagMomentOf } from '../features/flag/flag-moment.ts';
import { changesOfPublishing, type FlagChanges } from '../features/flag/plan-flag-changes.ts';
import { siteRoutes } from '../platform/guard.ts';
import { postNotices } from '../platform/notices.ts';
import { Conflict, foundOne, Refused } from '../platform/refuse.ts';
import { publishedSentence } from './check-sentences.ts';
import { peopleOfCompanies } from './people-concerned.ts';

/** What publishing would do, said before the press. */
export const publishPlanRoute = siteRoutes.check.publishPlan.handler(async ({ input, context: { platform, member } }) => {
	const { db, now } = platform;
	const check = await checkOf(db, member.siteId, input.checkId);
	const refusal = await whyNotPublished(db, check);
	const moment = await flagMomentOf(db, member.siteId, now());
	const changes = refusal === null ? await changesOfPublishing(db, member.siteId, check.id, moment) : { raised: [], changed: [] };
	const opened = changes.changed.filter(({ row, after }) => after.state === 'open' && row.state !== 'open');
	const toContractor = [...changes.raised.map(({ life }) => life), ...opened.map(({ after }) => after)];
	return {
		companies: await countedByCompany(
			db,
			toContractor.filter(({ verdict }) => verdict === 'outside'),
		),
		toEngineers: toContractor.filter(({ verdict }) => verdict !== 'outside').length,
		closes: changes.changed.filter(({ row, after }) => after.state === 'closed' && row.state !== 'closed').length,
		lapses: changes.changed.filter(({ after }) => after.state === 'lapsed').length,
		answerBy: new Date(moment.answerBy),
		commonShift: (check.findings ?? []).filter(({ code }) => code === 'common-shift'),
		uncheckedSetups: await uncheckedSetups(db, check.id),
		refusal: refusal?.message ?? null,
		planSha256: await sha256OfJson(planOf(changes)),
	} satisfies PublishPlan;
});

/** Published: it counts, its flags are raised, and the contractors concerned are told. What was shown is what is done, or it is refused. */
export const publishCheckRoute = siteRoutes.check.publish.handler(async ({ input, context: { platform, member } }) => {
	const { siteId } = member;
	const { checkId, answerBy, planSha256 } = input;
	const now = platform.now();
	if (answerBy <= now) throw new Refused('in-the-past', 'The contractors’ deadline lies in the past.', 'answerBy');
	await checkOf(platform.db, siteId, checkId);
	// Hashed before the transaction; inside, the same plan is asked for again.
	const seen = planOf(await changesOfPublishing(platform.db, siteId, checkId, await flagMomentOf(platform.db, siteId, now)));
	const isAsShown = (await sha256OfJson(seen)) === planSha256;
	return platform.transaction(async (tx) => {
		await lockSite(tx, siteId);
		const moment = { ...(await flagMomentOf(tx, siteId, now)), answerBy: answerBy.getTime() };
		const changes = await changesOfPublishing(tx, siteId, checkId, moment);
		const check = await publishCheck(tx, member, checkId, answerBy, now);
		if (!isAsShown || JSON.stringify(planOf(changes)) !== JSON.stringify(seen))
			throw new Conflict('The flags have changed since this was shown, so nothing was published. Look again, then publish.');
		const actId = platform.newId();
		const { raisedIds } = await applyFlagChanges(tx, platform, member, changes, actId);
		await rememberPublishing(tx, checkId, { actId, raisedIds, changed: changes.changed.map(({ row }) => row) });
		const lives = [...changes.raised.map(({ life }) => life), ...changes.changed.map(({ after }) => after)];
		const concerned = lives.filter(({ isWith, state }) => isWith === 'contractor' && state === 'open');
		await tellContractors(
			tx,
			concerned.flatMap(({ companyId }) => companyId ?? []),
			check.number,
			actId,
		);
		return { raised: changes.raised.length };
	});

	async function tellContractors(tx: Transaction, companyIds: readonly string[], number: number, actId: string): Promise<void> {
		const { timeZone } = foundOne(await tx.select({ timeZone: sites.timeZone }).from(sites).where(eq(sites.id, siteId)));
		const people = await peopleOfCompanies(tx, siteId, [...new Set(companyIds)], now);
		const told = people.map((person) => {
			const flags = companyIds.filter((companyId) => person.companyIds.includes(companyId)).length;
			return {
				kind: 'check-published' as const,
				userIds: [person.userId],
				subjectId: checkId,
				sentence: publishedSentence(number, flags, answerBy, timeZone),
				path: `/sites/${siteId}/flags`,
			};
		});
		await postNotices(tx, { siteId, actId, actorId: member.userId, now }, told);
	}
});

/** What of the changes a person is shown; deadlines are left out, they move with the clock. */
function planOf({ raised, changed }: FlagChanges): unknown {
	return {
		raised: raised.map(({ key, life }) => [key, life.verdict, life.isWith, life.companyId]),
		changed: changed.map(({ row, after }) => [row.id, row.version, after.state, after.isWith]),
	};
}

async function countedByCompany(db: Handle, lives: readonly { companyId: string | null }[]): Promise<PublishPlan['companies']> {
	const counts = new Map<string | null, number>();
	for (const { companyId } of lives) counts.set(companyId, (counts.get(companyId) ?? 0) + 1);
	const ids = [...counts.keys()].filter((companyId) => companyId !== null);
	const named =
		ids.length === 0 ? [] : await db.select({ id: companies.id, name: companies.name }).from(companies).where(inArray(companies.id, ids));
	return [...counts].map(([companyId, flags]) => ({ companyId, name: named.find(({ id }) => id === companyId)?.name ?? null, flags }));
}

async function uncheckedSetups(db: Handle, checkId: string): Promise<string[]> {
	const rows = await db
		.select({ name: setups.name })
		.from(checkFits)
		.innerJoin(fits, and(eq(fits.id, checkFits.fitId), isNull(fits.checkedBy)))
		.innerJoin(setups, eq(setups.id, checkFits.setupId))
		.where(eq(checkFits.checkId, checkId))
		.orderBy(setups.name);
	return rows.map(({ name }) => name);
}
