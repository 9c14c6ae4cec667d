import { randomBytes, randomUUID } from 'node:crypto';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { defaultPreferences, type Preferences } from '#shared/account/preferences.ts';
import type { NoticeKind } from '#shared/mail/notice.ts';
import { users } from '../../server/db/schema/account.ts';
import { mails, notices } from '../../server/db/schema/mail.ts';
import { sealedRecords } from '../../server/db/schema/record.ts';
import { memberships } from '../../server/db/schema/site.ts';
import { deliverNotices } from '../../server/platform/deliver-notices.ts';
import { peopleWith } from '../../server/platform/membership.ts';
import { type Notice, postNotices, takeBackNotices } from '../../server/platform/notices.ts';
import type { Member } from '../../server/platform/platform.ts';
import { openTestServer, type TestServer } from './harness.ts';

/** Zürich, a Tuesday: 11:00 by the site's clock, whose work begins at 07:00. */
const tuesday = new Date('2027-11-30T10:00:00Z');
const minutesOn = (minutes: number) => new Date(tuesday.getTime() + minutes * 60_000);
const wednesdayMorning = new Date('2027-12-01T06:00:00Z');

let server: TestServer;
let siteId: string;
let actor: Member;
let ida: Member;
let rob: Member;
beforeAll(async () => {
	server = await openTestServer({ mail: { kind: 'none' } });
});
afterAll(() => server.close());
beforeEach(async () => {
	await server.platform.db.delete(mails);
	await server.platform.db.delete(notices);
	siteId = await server.addSite('Field & Barn');
	actor = await server.addMember(siteId, ['site-engineer']);
	ida = await server.addMember(siteId, ['project-engineer']);
	rob = await server.addMember(siteId, ['owners-representative']);
});

const notice = (kind: NoticeKind, userIds: string[], more: Partial<Notice> = {}): Notice => ({
	kind,
	userIds,
	subjectId: 'flag 31',
	sentence: `Something of the kind ${kind} waits.`,
	path: `/sites/${siteId}/flags`,
	...more,
});
const post = (told: Notice[], actId: string = randomUUID(), now = tuesday) =>
	server.platform.transaction((tx) => postNotices(tx, { siteId, actId, actorId: actor.userId, now }, told)).then(() => actId);
const takeBack = (actId: string, now: Date, by: Member = actor) =>
	server.platform.transaction((tx) => takeBackNotices(tx, { siteId, actId, actorId: by.userId, now }));
const deliver = (now: Date) => deliverNotices({ ...server.platform, publicUrl: () => 'https://board.example', now: () => now });
const letters = () => server.platform.db.select().from(mails);

describe('a notice', () => {
	it('of Hold leaves at once, of a call after three minutes, of an answer when work begins', async () => {
		await post([notice('hold', [ida.userId])]);
		await post([notice('hold-point-called', [ida.userId])]);
		await post([notice('flag-answered', [ida.userId])]);
		const heard: string[] = [];
		for (const at of [tuesday, minutesOn(2.9), minutesOn(3), minutesOn(600), wednesdayMorning]) {
			await deliver(at);
			heard.push(
				(await letters()).map(({ subject }) => subject.replace(/.*kind (\S+) waits.*/, '$1').replace(/.*: one.*/, 'digest')).join(' '),
			);
		}
		expect(heard).toEqual(['hold', 'hold', 'hold hold-point-called', 'hold hold-point-called', 'hold hold-point-called digest']);
	});

	it('is told as its person wishes, but what must be told is told at once', async () => {
		const { db } = server.platform;
		const wish = (userId: string, notices: Preferences['notices']) =>
			db
				.update(users)
				.set({ preferences: { ...defaultPreferences, notices } })
				.where(eq(users.id, userId));
		await wish(ida.userId, 'digest');
		await wish(rob.userId, 'none');
		const both = [ida.userId, rob.userId];
		await post([notice('hold', both)]);
		await post([notice('hold-point-called', both)]);
		await post([notice('flag-answered', both)]);
		const heard: string[] = [];
		for (const at of [minutesOn(3), minutesOn(600), wednesdayMorning]) {
			await deliver(at);
			const kept = await letters();
			heard.push(both.map((_, i) => kept.filter(({ toAddress }) => toAddress === [ida, rob][i]?.email).length).join(' '));
		}
		expect(heard).toEqual(['1 1', '1 1', '2 1']);
		const rows = await db.select().from(notices).where(eq(notices.userId, rob.userId));
		expect(Object.fromEntries(rows.map(({ kind, end }) => [kind, end]))).toEqual({
			hold: 'mailed',
			'hold-point-called': 'not-wished',
			'flag-answered': 'not-wished',
		});
	});

	it('is one letter a person with all that came due, each with its place and its deviation', async () => {
		const rod = { limitsMm: [-10, 10], deviationMm: 23, expandedUncertaintyMm: 3.2, verdict: 'outside' } as const;
		await post([
			notice('flag-answered', [ida.userId, rob.userId], { path: `/sites/${siteId}/flags/1`, rod }),
			notice('flag-put-right', [ida.userId], { subjectId: 'flag 32', path: `/sites/${siteId}/flags/2`, sentence: 'A <b>bold</b> firm.' }),
		]);
		expect(await deliver(wednesdayMorning)).toBe(2);
		const mine = (await letters()).find(({ toAddress }) => toAddress === ida.email)!;
		expect(mine.subject).toBe('Field & Barn: 2 things are new for you');
		expect(mine.text).toContain(`https://board.example/sites/${siteId}/flags/1`);
		expect(mine.text).toMatch(/─+┼─+┼─+▶─* {2}allowed −10 to \+10: \+23 ±3 mm/);
		expect(mine.html).toContain('A &lt;b&gt;bold&lt;/b&gt; firm.');
		expect(mine.html).toContain('allowed −10 to +10: +23 ±3 mm');
	});

	it('brings the head of the site’s chain of records, the newest of them', async () => {
		const record = (sequence: number, previous: string | null) => ({
			id: randomUUID(),
			siteId,
			sequence,
			sha256: randomBytes(32).toString('hex'),
			previous,
			act: 'released' as const,
			pourId: randomUUID(),
			holdPoint: 'before-pour' as const,
			keySha256: 'b'.repeat(64),
			signedBy: rob.userId,
			signedAt: tuesday,
			text: '{}',
		});
		const first = record(1, null);
		const second = record(2, first.sha256);
		for (const row of [first, second]) await server.platform.db.insert(sealedRecords).values(row);
		await post([notice('hold', [ida.userId])]);
		await deliver(tuesday);
		const [mail] = await letters();
		expect(mail!.text).toContain(`ends with record 2, ${second.sha256}.`);
		expect(mail!.text).toContain('https://board.example/verify');
	});

	it('is told once, not to who acted, and not twice of the same thing in one act', async () => {
		const actId = await post([notice('check-published', [ida.userId, ida.userId, actor.userId])]);
		await post([notice('check-published', [ida.userId])], actId);
		expect(await deliver(minutesOn(5))).toBe(1);
		expect(await deliver(minutesOn(6))).toBe(0);
		expect((await letters()).map(({ toAddress }) => toAddress)).toEqual([ida.email]);
	});

	it('is mailed once where two rounds run at the same time', async () => {
		await post(Array.from({ length: 20 }, (_, n) => notice('check-published', [ida.userId, rob.userId], { subjectId: `check ${n}` })));
		const written = await Promise.all([deliver(minutesOn(5)), deliver(minutesOn(5))]);
		const told = (await letters()).flatMap(({ text }) => text!.match(/waits\./g) ?? []);
		expect(written[0]! + written[1]!).toBe((await letters()).length);
		expect(told).toHaveLength(40);
	});

	it('is not told to who has left the site meanwhile', async () => {
		await post([notice('check-published', [ida.userId])]);
		await server.platform.db
			.update(memberships)
			.set({ leftAt: minutesOn(1) })
			.where(eq(memberships.userId, ida.userId));
		expect(await deliver(minutesOn(5))).toBe(0);
		expect(await server.platform.db.select().from(notices)).toMatchObject([{ end: 'left-the-site' }]);
	});

	it('is gone with its act where that rolls back', async () => {
		const broken = server.platform.transaction(async (tx) => {
			await postNotices(tx, { siteId, actId: randomUUID(), actorId: null, now: tuesday }, [notice('hold', [ida.userId])]);
			throw new Error('No.');
		});
		await expect(broken).rejects.toThrow('No.');
		expect(await deliver(wednesdayMorning)).toBe(0);
	});
});

describe('an act', () => {
	it('is taken back within three minutes, by who acted, and then nobody is told', async () => {
		const actId = await post([notice('check-published', [ida.userId]), notice('flag-answered', [rob.userId])]);
		expect(await takeBack(actId, minutesOn(1), ida)).toBe(false);
		expect(await takeBack(actId, minutesOn(2.9))).toBe(true);
		expect(await deliver(wednesdayMorning)).toBe(0);
		expect(await takeBack(actId, minutesOn(2.95))).toBe(false);
	});

	it('is not taken back later, though its digest has not left', async () => {
		const actId = await post([notice('flag-answered', [rob.userId])]);
		expect(await takeBack(actId, minutesOn(3))).toBe(false);
		expect(await deliver(wednesdayMorning)).toBe(1);
	});

	it('of Hold or release is never taken back', async () => {
		const actId = await post([notice('hold', [ida.userId]), notice('flag-answered', [rob.userId])]);
		expect(await takeBack(actId, minutesOn(0.1))).toBe(false);
		expect(await server.platform.db.$count(notices, eq(notices.actId, actId))).toBe(2);
	});
});

describe('the people told', () => {
	it('are those who hold a role now, of contractors those of the company', async () => {
		const fennick = await server.addCompany(siteId, 'Fennick Forms');
		const steel = await server.addCompany(siteId, 'Oster Steel');
		const forms = await server.addMember(siteId, ['contractor'], fennick);
		await server.addMember(siteId, ['contractor'], steel);
		const elsewhere = await server.addMember(await server.addSite('Elsewhere'), ['project-engineer']);
		const now = new Date();
		const of = (roles: Parameters<typeof peopleWith>[1]['roles'], companyId?: string) =>
			peopleWith(server.platform.db, { siteId, roles, now, ...(companyId === undefined ? {} : { companyId }) });
		expect(await of(['project-engineer'])).toEqual([ida.userId]);
		expect(await of(['project-engineer'])).not.toContain(elsewhere.userId);
		expect((await of(['contractor', 'project-engineer'], fennick)).sort()).toEqual([ida.userId, forms.userId].sort());
		expect(await peopleWith(server.platform.db, { siteId, roles: ['project-engineer'], now: new Date('2020-01-01T00:00:00Z') })).toEqual(
			[],
		);
	});
});
