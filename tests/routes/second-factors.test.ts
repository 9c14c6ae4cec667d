import { safe } from '@orpc/client';
import { and, eq } from 'drizzle-orm';
import { Secret, TOTP } from 'otpauth';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { recoveryCodes, sessions, totps, users } from '../../server/db/schema/account.ts';
import { auditEntries } from '../../server/db/schema/record.ts';
import { sites } from '../../server/db/schema/site.ts';
import { sealOpenSecrets } from '../../server/features/account/seal-open-secrets.ts';
import { hashPassword } from '../../server/platform/password.ts';
import { cookieOf, openTestServer, type TestServer } from './harness.ts';
import { refusalCode } from './refusal-code.ts';

const password = 'north river 31 crane barrow';

let server: TestServer;
beforeAll(async () => {
	server = await openTestServer({ proxyHops: 1 });
});
afterAll(() => server.close());

/** The code an app shows so many half minutes from now. */
const codeAt = (secret: string, steps = 0) =>
	new TOTP({ secret: Secret.fromBase32(secret) }).generate({ timestamp: Date.now() + steps * 30_000 });
/** A call whose Set-Cookie is wanted, from a network address of its own. */
const call = (path: string, input: unknown, address: string) =>
	server.fetch(`/rpc/account/${path}`, {
		method: 'POST',
		headers: { 'content-type': 'application/json', 'x-forwarded-for': address },
		body: JSON.stringify({ json: input }),
	});
const sessionOf = (answer: Response) => server.api(cookieOf(answer.headers.get('set-cookie') ?? ''));
const stepOf = async (email: string, as = password) => {
	const { error } = await safe(server.api().account.signIn({ email, password: as }));
	const asked = error as { code?: string; data?: { stepToken: string } } | null;
	expect(asked?.code).toBe('SECOND_FACTOR');
	return asked?.data?.stepToken ?? '';
};

/** A person with an app; its first code was used up. */
async function withCodes(name: string) {
	const person = await server.addPerson(name, password);
	const mine = server.api(person.cookie).account;
	await mine.reauthenticate({ proof: { way: 'password', password } });
	const { secret, uri } = await mine.beginCodes();
	// A step back, so that the code of the moment is still unused.
	const confirmed = await mine.confirmCodes({ code: codeAt(secret, -1) });
	return { ...person, mine, secret, uri, recovery: confirmed.recoveryCodes };
}

describe('codes of an app', () => {
	it('are set up only in a fresh session, and asked from the first right code on', async () => {
		const person = await server.addPerson('Toni Totp', password);
		const mine = server.api(person.cookie).account;
		expect(await refusalCode(mine.beginCodes())).toBe('not-fresh');
		expect(await refusalCode(mine.reauthenticate({ proof: { way: 'password', password: 'wrong' } }))).toBe('WRONG');
		expect(await refusalCode(mine.beginCodes())).toBe('not-fresh');
		const { freshUntil } = await mine.reauthenticate({ proof: { way: 'password', password } });
		const aheadMs = freshUntil.getTime() - Date.now();
		expect(aheadMs).toBeGreaterThan(9 * 60_000);
		expect(aheadMs).toBeLessThanOrEqual(10 * 60_000);
		const { secret, uri } = await mine.beginCodes();
		expect(uri).toMatch(/^otpauth:\/\/totp\/Batterboard:/);
		// Not confirmed: the password alone still opens.
		expect(await refusalCode(server.api().account.signIn({ email: person.email, password }))).toBe('done');
		expect(await refusalCode(mine.confirmCodes({ code: '000000' }))).toBe('WRONG');
		const { recoveryCodes: codes } = await mine.confirmCodes({ code: codeAt(secret) });
		expect(new Set(codes).size).toBe(10);
		const [row] = await server.platform.db.select().from(totps).where(eq(totps.userId, person.userId));
		expect(row?.secret).toMatch(/^sealed1\./);
		expect(server.platform.secrets.open(row?.secret ?? '', person.userId)).toBe(secret);
		expect(await refusalCode(mine.beginCodes())).toBe('set-up-already');
		expect(await refusalCode(server.api().account.signIn({ email: person.email, password }))).toBe('SECOND_FACTOR');
		const kept = await server.platform.db.select().from(recoveryCodes).where(eq(recoveryCodes.userId, person.userId));
		for (const code of codes) expect(JSON.stringify(kept)).not.toContain(code.replaceAll('-', ''));
		await server.platform.db
			.update(sessions)
			.set({ freshUntil: new Date(Date.now() - 1) })
			.where(eq(sessions.userId, person.userId));
		expect(await refusalCode(mine.removeCodes())).toBe('not-fresh');
	});

	it('open once: the same code again is refused, also of three at once, and so is an older one', async () => {
		const person = await withCodes('Rhea Replay');
		const steps = [await stepOf(person.email), await stepOf(person.email), await stepOf(person.email)];
		const code = codeAt(person.secret);
		const outcomes = await Promise.all(steps.map((stepToken) => refusalCode(server.api().account.signInSecond({ stepToken, code }))));
		expect(outcomes.sort()).toEqual(['WRONG', 'WRONG', 'done']);
		const next = await stepOf(person.email);
		for (const old of [codeAt(person.secret, -1), code])
			expect(await refusalCode(server.api().account.signInSecond({ stepToken: next, code: old }))).toBe('WRONG');
	});

	it('mark the session, which the site may ask of who adopts', async () => {
		const siteId = await server.addSite();
		const member = await server.addMember(siteId, ['site-engineer']);
		await server.platform.db.update(sites).set({ needsSecondFactor: true }).where(eq(sites.id, siteId));
		await server.platform.db
			.update(users)
			.set({ passwordHash: await hashPassword(password) })
			.where(eq(users.id, member.userId));
		const fitId = '11111111-1111-4111-8111-111111111111';
		const asked = { siteId, fitId, reason: 'r', note: 'n' };
		const adopt = (api: typeof member.api) => refusalCode(api.fit.adopt({ siteId, fitId, reason: asked.reason }));
		expect(await adopt(member.api)).toBe('second-factor-needed');
		expect(await refusalCode(member.api.fit.confirm({ siteId, fitId, note: asked.note }))).toBe('second-factor-needed');
		const { account } = member.api;
		expect((await account.factors()).askedBy).toEqual(['Testfield 1']);
		await account.reauthenticate({ proof: { way: 'password', password } });
		const { secret } = await account.beginCodes();
		await account.confirmCodes({ code: codeAt(secret, -1) });
		// Set up is not shown: the session is still one of a password.
		expect(await adopt(member.api)).toBe('second-factor-needed');
		await account.reauthenticate({ proof: { way: 'code', code: codeAt(secret) } });
		expect(await adopt(member.api)).toBe('NOT_FOUND');
		const stepToken = await stepOf(member.email);
		const answer = await call('signInSecond', { stepToken, code: codeAt(secret, 1) }, '203.0.113.40');
		expect(await adopt(sessionOf(answer))).toBe('NOT_FOUND');
	});

	it('are slowed: five tries a step, ten a person, and the step is of one browser', async () => {
		const person = await withCodes('Gero Guess');
		const stepToken = await stepOf(person.email);
		for (let n = 0; n < 5; n += 1)
			expect(await refusalCode(server.api().account.signInSecond({ stepToken, code: '000001' }))).toBe('WRONG');
		// The right one comes too late on this step.
		expect(await refusalCode(server.api().account.signInSecond({ stepToken, code: codeAt(person.secret) }))).toBe('WRONG');
		expect(await refusalCode(server.api().account.signInSecond({ stepToken: 'x'.repeat(43), code: codeAt(person.secret) }))).toBe('WRONG');
		const second = await stepOf(person.email);
		for (let n = 0; n < 5; n += 1) await refusalCode(server.api().account.signInSecond({ stepToken: second, code: '000001' }));
		const third = await stepOf(person.email);
		expect(await refusalCode(server.api().account.signInSecond({ stepToken: third, code: codeAt(person.secret) }))).toBe('TOO_MANY');
		const failed = await server.platform.db
			.select()
			.from(auditEntries)
			.where(and(eq(auditEntries.kind, 'sign-in-failed'), eq(auditEntries.subjectId, person.userId)));
		expect(failed).toHaveLength(10);
		for (const { siteId, userId, address } of failed)
			expect({ siteId, userId, address }).toEqual({ siteId: null, userId: null, address: '127.0.0.1' });
	});

	it('are sealed at the next start where they were kept readable before, and still open', async () => {
		const { db } = server.platform;
		const person = await withCodes('Olga Older');
		await db.update(totps).set({ secret: person.secret }).where(eq(totps.userId, person.userId));
		expect(await sealOpenSecrets(server.platform)).toBe(1);
		expect(await sealOpenSecrets(server.platform)).toBe(0);
		const stepToken = await stepOf(person.email);
		expect(await refusalCode(server.api().account.signInSecond({ stepToken, code: codeAt(person.secret) }))).toBe('done');
	});

	it('open nothing with the secret of another person’s row', async () => {
		const { db } = server.platform;
		const [one, two] = [await withCodes('Una One'), await withCodes('Tom Two')];
		const [row] = await db.select().from(totps).where(eq(totps.userId, one.userId));
		await db
			.update(totps)
			.set({ secret: row?.secret ?? '' })
			.where(eq(totps.userId, two.userId));
		const stepToken = await stepOf(two.email);
		expect(await refusalCode(server.api().account.signInSecond({ stepToken, code: codeAt(one.secret) }))).toBe('WRONG');
	});
});

describe('recovery codes', () => {
	it('open once each, in place of the app, and new ones end the old', async () => {
		const person = await withCodes('Rike Recovery');
		const [first = '', second = ''] = person.recovery;
		const use = async (code: string) => {
			const answer = await call('signInSecond', { stepToken: await stepOf(person.email), code }, '203.0.113.50');
			return answer.ok ? sessionOf(answer) : null;
		};
		const opened = await use(first.toUpperCase().replaceAll('-', ' '));
		expect((await opened?.account.factors())?.recoveryCodesLeft).toBe(9);
		expect(await use(first)).toBeNull();
		const stepTokens = [await stepOf(person.email), await stepOf(person.email)];
		const outcomes = await Promise.all(
			stepTokens.map((stepToken) => refusalCode(server.api().account.signInSecond({ stepToken, code: second }))),
		);
		expect(outcomes.sort()).toEqual(['WRONG', 'done']);
		const { recoveryCodes: fresh } = await person.mine.newRecoveryCodes();
		expect(await use(person.recovery[2] ?? '')).toBeNull();
		expect(await use(fresh[0] ?? '')).not.toBeNull();
		await person.mine.removeCodes();
		expect(await server.platform.db.select().from(totps).where(eq(totps.userId, person.userId))).toEqual([]);
		expect(await refusalCode(server.api().account.signIn({ email: person.email, password }))).toBe('done');
	});
});
