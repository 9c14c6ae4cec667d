import { randomUUID } from 'node:crypto';
import { and, eq, isNull } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { checks } from '../../server/db/schema/check.ts';
import { flagActs, flagAnswers } from '../../server/db/schema/flag.ts';
import { notices } from '../../server/db/schema/mail.ts';
import { auditEntries } from '../../server/db/schema/record.ts';
import { sites } from '../../server/db/schema/site.ts';
import { aSite } from '../builders/a-site.ts';
import { raiseFlags } from '../builders/raised-flags.ts';
import { uploadFile } from '../builders/upload-file.ts';
import { openTestServer, type TestServer } from './harness.ts';

let server: TestServer;
beforeAll(async () => {
	server = await openTestServer();
});
afterAll(() => server.close());

const inDays = (days: number) => new Date(Date.now() + days * 86_400_000);
const answer = { kind: 'put-right' as const, means: 'rework' as const, how: 'Grind.', by: inDays(2) };
const rework = { kind: 'rework' as const, reason: 'The stair will not fit.', by: null };

async function flagged(count = 1, over?: Parameters<typeof raiseFlags>[3]) {
	const site = await aSite(server);
	const raised = await raiseFlags(server, site, count, over);
	const [flagId] = raised.flagIds as [string];
	const on = (version: number, ids = [flagId]) => ({ siteId: site.siteId, flags: ids.map((id) => ({ flagId: id, version })) });
	const seen = () => site.engineer.api.flag.get({ siteId: site.siteId, flagId });
	const told = async (kind?: string) => {
		const rows = await server.platform.db
			.select()
			.from(notices)
			.where(and(eq(notices.siteId, site.siteId), isNull(notices.endedAt)));
		return rows.filter((one) => kind === undefined || one.kind === kind);
	};
	return { ...site, ...raised, flagId, on, seen, told };
}

describe('an act on a flag', () => {
	it('that is sent twice, as after a lost receipt, is done once, also at the same time', async () => {
		const { contractor, engineer, on, seen, flagId } = await flagged();
		const actId = randomUUID();
		const first = await contractor.api.flag.answer({ ...on(1), answer, actId });
		expect(first).toEqual({ changed: 1, actId });
		const again = await Promise.all([1, 2].map(() => contractor.api.flag.answer({ ...on(1), answer, actId })));
		expect(again).toEqual([first, first]);
		expect(await server.platform.db.select().from(flagAnswers).where(eq(flagAnswers.flagId, flagId))).toHaveLength(1);
		expect(await seen()).toMatchObject({ state: 'answered', version: 2 });
		const twice = randomUUID();
		const outcomes = await Promise.all([1, 2].map(() => engineer.api.flag.decide({ ...on(2), decision: rework, actId: twice })));
		expect(outcomes).toEqual([1, 2].map(() => ({ changed: 1, actId: twice })));
		expect((await seen()).version).toBe(3);
		// Another person's act by its id is none of theirs.
		await expect(engineer.api.flag.decide({ ...on(3), decision: rework, actId })).rejects.toMatchObject({ code: 'NOT_FOUND' });
	});

	it('tells whom it concerns, with the rod and the way there, and nobody else', async () => {
		const { contractor, engineer, surveyor, owner, on, told, siteId, flagId, secondSurveyor } = await flagged();
		await server.platform.db.update(sites).set({ needsOwnersConsent: true }).where(eq(sites.id, siteId));
		await contractor.api.flag.askTime({ ...on(1), until: inDays(9) });
		await engineer.api.flag.grantTime(on(2));
		await contractor.api.flag.answer({ ...on(3), answer });
		const limits = { upToMm: 30, extent: 'This face', number: null, until: null, use: null };
		await engineer.api.flag.decide({
			...on(4),
			decision: { kind: 'concession', reason: 'Play.', conditions: null, limits },
		});
		await owner.api.flag.consent({ ...on(5), isGiven: false, reason: 'No.' });
		await engineer.api.flag.decide({ ...on(6), decision: rework });
		await contractor.api.flag.putRight(on(7));
		await contractor.api.flag.comment({ siteId, flagId, text: 'Ground off by 2 pm' });
		const who = new Map(
			[contractor, engineer, surveyor, secondSurveyor, owner].map(({ userId }, index) => [
				userId,
				'contractor engineer s1 s2 owner'.split(' ')[index],
			]),
		);
		const rows = (await told()).toSorted((a, b) => a.createdAt.getTime() - b.createdAt.getTime());
		expect(rows.map(({ kind, userId }) => `${kind} ${who.get(userId)}`).sort()).toEqual(
			[
				'flag-time-wished engineer',
				'flag-time-granted contractor',
				'flag-answered engineer',
				'flag-decided contractor',
				'flag-decided owner',
				'flag-decided contractor',
				'flag-decided engineer',
				'flag-decided contractor',
				'flag-put-right s1',
				'flag-put-right s2',
				'flag-put-right engineer',
				'flag-comment engineer',
			].sort(),
		);
		const answered = rows.find(({ kind }) => kind === 'flag-answered')!;
		expect(answered).toMatchObject({ path: `/sites/${siteId}/flags/${flagId}`, subjectId: flagId });
		expect(answered.rod).toEqual({ limitsMm: [-10, 10], deviationMm: 23, expandedUncertaintyMm: 3, verdict: 'outside' });
		expect(answered.sentence).toMatch(/^contractor answers flag 1, C\/1, ground, faces: will put it right: rework, by \d{4}-\d\d-\d\d\.$/);
	});
});

describe('taking back', () => {
	it('brings the flag back as it was, tells nobody, and is in the audit', async () => {
		const { contractor, engineer, on, seen, told, siteId, flagId } = await flagged();
		const { actId } = await contractor.api.flag.answer({ ...on(1), answer });
		const own = await contractor.api.flag.get({ siteId, flagId });
		expect(own.takeBack).toMatchObject({ actId });
		expect((await seen()).takeBack).toBeNull();
		await expect(engineer.api.flag.takeBack({ siteId, actId })).rejects.toMatchObject({ code: 'NOT_FOUND' });
		expect(await contractor.api.flag.takeBack({ siteId, actId })).toEqual({ changed: 1 });
		expect(await seen()).toMatchObject({ state: 'open', answer: null, version: 3 });
		expect((await seen()).history.map(({ words }) => words)).toEqual(['Raised']);
		expect(await told()).toEqual([]);
		await expect(contractor.api.flag.takeBack({ siteId, actId })).rejects.toMatchObject({ code: 'CONFLICT' });
		const kinds = await server.platform.db.select().from(auditEntries).where(eq(auditEntries.subjectId, flagId));
		expect(kinds.map(({ kind }) => kind).sort()).toEqual(['flag-act-taken-back', 'flag-answered']);
		// A changed answer goes back to the one before it.
		await contractor.api.flag.answer({ ...on(3), answer });
		const second = await contractor.api.flag.answer({ ...on(4), answer: { kind: 'concession', why: 'No harm.' } });
		await contractor.api.flag.takeBack({ siteId, actId: second.actId });
		expect(await seen()).toMatchObject({ state: 'answered', answer });
		// A decision likewise, over several and only while nobody has acted on it.
		const decided = await engineer.api.flag.decide({ ...on(6), decision: rework });
		await contractor.api.flag.putRight(on(7));
		await expect(engineer.api.flag.takeBack({ siteId, actId: decided.actId })).rejects.toMatchObject({ code: 'CONFLICT' });
		expect(await seen()).toMatchObject({ state: 'put-right', version: 8 });
	});

	it('is refused after three minutes, and once someone was told', async () => {
		const { contractor, engineer, on, seen, siteId } = await flagged(2);
		const { actId } = await contractor.api.flag.answer({ ...on(1), answer });
		const early = new Date(Date.now() - 181_000);
		await server.platform.db.update(flagActs).set({ actedAt: early }).where(eq(flagActs.actId, actId));
		await expect(contractor.api.flag.takeBack({ siteId, actId })).rejects.toMatchObject({ data: { code: 'too-late' } });
		const decided = await engineer.api.flag.decide({ ...on(2), decision: rework });
		await server.platform.db.update(notices).set({ endedAt: new Date(), end: 'mailed' }).where(eq(notices.actId, decided.actId));
		await expect(engineer.api.flag.takeBack({ siteId, actId: decided.actId })).rejects.toMatchObject({ data: { code: 'too-late' } });
		expect(await seen()).toMatchObject({ state: 'decided', version: 3 });
	});
});

describe('points of a contractor’s own', () => {
	const table = 'name,easting,northing,height\nP1,1.000,2.000,3.000\nP2,4.000,5.000,6.000\nP3,4.100,5.100,6.100\n';

	it('are brought to its own flag, stored by a site engineer, named in a contest, and publish nothing', async () => {
		const { contractor, surveyor, engineer, otherCompanyId, on, seen, siteId, flagId, surveyId, checkId } = await flagged();
		const other = await server.addMember(siteId, ['contractor'], otherCompanyId);
		const bring = async (who: typeof contractor, content = table) =>
			who.api.flag.bringPoints({ siteId, flagId, uploadId: await uploadFile(server, who, 'own.csv', content) });
		await expect(bring(other)).rejects.toMatchObject({ code: 'NOT_FOUND' });
		await expect(bring(contractor, '\u0000\u0001nothing')).rejects.toMatchObject({ code: 'REFUSED' });
		const { broughtId } = await bring(contractor);
		await expect(bring(contractor)).rejects.toMatchObject({ data: { code: 'points-there' } });
		expect(await (await surveyor.api.flag.broughtFile({ siteId, broughtId })).text()).toBe(table);
		await expect(other.api.flag.broughtFile({ siteId, broughtId })).rejects.toMatchObject({ code: 'NOT_FOUND' });
		const contest = { kind: 'contest' as const, why: 'Measured through rebar.', ownSurveyId: surveyId };
		await expect(contractor.api.flag.answer({ ...on(1), answer: contest })).rejects.toMatchObject({ data: { code: 'not-your-survey' } });
		await expect(contractor.api.flag.storePoints({ siteId, broughtId, surveyId })).rejects.toMatchObject({ code: 'FORBIDDEN' });
		// A survey that a published check rests on is none to be shown beside.
		await expect(surveyor.api.flag.storePoints({ siteId, broughtId, surveyId })).rejects.toMatchObject({
			data: { code: 'already-published' },
		});
		expect((await seen()).brought).toMatchObject([{ fileName: 'own.csv', companyName: 'Formwork Ltd', surveyId: null, deviations: [] }]);
		await server.platform.db.update(checks).set({ state: 'trial' }).where(eq(checks.id, checkId));
		await surveyor.api.flag.storePoints({ siteId, broughtId, surveyId });
		await expect(surveyor.api.flag.storePoints({ siteId, broughtId, surveyId })).rejects.toMatchObject({ code: 'CONFLICT' });
		expect((await engineer.api.flag.get({ siteId, flagId })).ownSurveys).toMatchObject([{ surveyId, number: 1 }]);
		await contractor.api.flag.answer({ ...on(1), answer: contest });
		expect(await seen()).toMatchObject({ state: 'answered', brought: [{ surveyNumber: 1, checkId, companyName: 'Formwork Ltd' }] });
		// What is brought is shown beside: a check by it is never published.
		const plan = await surveyor.api.check.publishPlan({ siteId, checkId });
		expect(plan.refusal).toMatch(/points that Formwork Ltd brought/);
	});
});
