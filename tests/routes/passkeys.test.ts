import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { challenges } from '../../server/db/schema/account.ts';
import { relyingParty } from '../../server/features/account/passkeys.ts';
import { type SoftwarePasskey, softwarePasskey } from '../builders/software-passkey.ts';
import { cookieOf, openTestServer, type TestServer } from './harness.ts';
import { refusalCode } from './refusal-code.ts';

const password = 'north river 31 crane barrow';
const origin = 'https://board.example';
const rpID = 'board.example';

let server: TestServer;
beforeAll(async () => {
	server = await openTestServer({ publicUrl: origin });
});
afterAll(() => server.close());

type Person = Awaited<ReturnType<typeof someone>>;
async function someone(name: string) {
	const person = await server.addPerson(name, password);
	const { account } = server.api(person.cookie);
	await account.reauthenticate({ proof: { way: 'password', password } });
	return { ...person, account };
}
const challengeIn = ({ options }: { options: Record<string, unknown> }) => String(options.challenge);

async function withPasskey(person: Person, key: SoftwarePasskey): Promise<void> {
	const asked = await person.account.beginPasskey();
	await person.account.addPasskey({
		challengeId: asked.challengeId,
		name: 'Site phone',
		response: key.make(challengeIn(asked), origin, rpID),
	});
}

describe('a passkey', () => {
	it('is added in a fresh session, opens a session with a second factor, is listed and removed', async () => {
		const person = await someone('Paula Passkey');
		const key = softwarePasskey();
		await withPasskey(person, key);
		const asked = await server.api().account.askPasskey({});
		const answer = await server.fetch('/rpc/account/signInByPasskey', {
			method: 'POST',
			headers: { 'content-type': 'application/json' },
			body: JSON.stringify({ json: { challengeId: asked.challengeId, response: key.show(challengeIn(asked), origin, rpID) } }),
		});
		expect(answer.status).toBe(200);
		const opened = server.api(cookieOf(answer.headers.get('set-cookie') ?? ''));
		const factors = await opened.account.factors();
		expect(factors).toMatchObject({ hasSecondFactor: true, freshUntil: null, passkeyOrigin: origin });
		expect(factors.passkeys).toMatchObject([{ passkeyId: key.id, name: 'Site phone', lastUsedAt: expect.any(Date) }]);
		// Removing asks who one is; the passkey itself may say it.
		expect(await refusalCode(opened.account.removePasskey({ passkeyId: key.id }))).toBe('not-fresh');
		const again = await opened.account.askPasskeyAgain();
		const proof = { way: 'passkey' as const, challengeId: again.challengeId, response: key.show(challengeIn(again), origin, rpID) };
		expect(await refusalCode(opened.account.reauthenticate({ proof }))).toBe('done');
		const stranger = await someone('Sven Stranger');
		expect(await refusalCode(stranger.account.removePasskey({ passkeyId: key.id }))).toBe('NOT_FOUND');
		expect(await refusalCode(opened.account.removePasskey({ passkeyId: key.id }))).toBe('done');
		const next = await server.api().account.askPasskey({});
		const response = key.show(challengeIn(next), origin, rpID);
		expect(await refusalCode(server.api().account.signInByPasskey({ challengeId: next.challengeId, response }))).toBe('WRONG');
	});

	it('is refused from another origin, for another name, unverified, over another challenge, and a second time', async () => {
		const person = await someone('Olga Origin');
		const key = softwarePasskey();
		const show = async (alter: (challenge: string) => ReturnType<SoftwarePasskey['show']>, challengeId?: string) => {
			const asked = await server.api().account.askPasskey({});
			const response = alter(challengeIn(asked));
			return refusalCode(server.api().account.signInByPasskey({ challengeId: challengeId ?? asked.challengeId, response }));
		};
		for (const [from, name] of [
			['https://evil.example', rpID],
			[origin, 'evil.example'],
		] as const) {
			const asked = await person.account.beginPasskey();
			const response = key.make(challengeIn(asked), from, name);
			expect(await refusalCode(person.account.addPasskey({ challengeId: asked.challengeId, name: 'x', response }))).toBe('WRONG');
		}
		await withPasskey(person, key);
		expect(await show((challenge) => key.show(challenge, 'https://evil.example', rpID))).toBe('WRONG');
		expect(await show((challenge) => key.show(challenge, origin, 'evil.example'))).toBe('WRONG');
		expect(await show((challenge) => key.show(challenge, origin, rpID, { isUserVerified: false }))).toBe('WRONG');
		expect(await show(() => key.show('AAAA', origin, rpID))).toBe('WRONG');
		expect(await show((challenge) => softwarePasskey().show(challenge, origin, rpID))).toBe('WRONG');
		expect(await show((challenge) => ({ ...softwarePasskey().show(challenge, origin, rpID), id: key.id, rawId: key.id }))).toBe('WRONG');
		// A copy counts from where the copied one stood.
		expect(await show((challenge) => key.show(challenge, origin, rpID, { count: 20 }))).toBe('done');
		expect(await show((challenge) => key.show(challenge, origin, rpID, { count: 20 }))).toBe('WRONG');
		const asked = await server.api().account.askPasskey({});
		const response = key.show(challengeIn(asked), origin, rpID, { count: 30 });
		const twice = [1, 2].map(() => refusalCode(server.api().account.signInByPasskey({ challengeId: asked.challengeId, response })));
		expect((await Promise.all(twice)).sort()).toEqual(['WRONG', 'done']);
	});

	it('asks within five minutes, of the one who was asked', async () => {
		const [one, other] = [await someone('Otto One'), await someone('Olaf Other')];
		const key = softwarePasskey();
		await withPasskey(one, key);
		const asked = await one.account.beginPasskey();
		const made = softwarePasskey().make(challengeIn(asked), origin, rpID);
		expect(await refusalCode(other.account.addPasskey({ challengeId: asked.challengeId, name: 'x', response: made }))).toBe('WRONG');
		const again = await other.account.askPasskeyAgain();
		const response = key.show(challengeIn(again), origin, rpID);
		const proof = { way: 'passkey' as const, challengeId: again.challengeId, response };
		expect(await refusalCode(other.account.reauthenticate({ proof }))).toBe('WRONG');
		const late = await one.account.beginPasskey();
		const [row] = await server.platform.db.select().from(challenges).where(eq(challenges.id, late.challengeId));
		expect((row?.expiresAt.getTime() ?? 0) - Date.now()).toBeLessThanOrEqual(5 * 60_000);
		await server.platform.db.update(challenges).set({ expiresAt: new Date(Date.now() - 1) });
		const lateMade = softwarePasskey().make(challengeIn(late), origin, rpID);
		expect(await refusalCode(one.account.addPasskey({ challengeId: late.challengeId, name: 'x', response: lateMade }))).toBe('WRONG');
	});
});

describe('whom passkeys are bound to', () => {
	it.each([
		['https://board.example', { rpID: 'board.example', origin: 'https://board.example' }],
		['http://127.0.0.1:4173', { rpID: 'localhost', origin: 'http://localhost:4173' }],
		['http://[::1]:80', { rpID: 'localhost', origin: 'http://localhost' }],
		['http://192.168.1.7:4173', null],
		['http://[fe80::1]:4173', null],
	])('follows from %s', (publicUrl, expected) => {
		expect(relyingParty(publicUrl)).toEqual(expected);
	});
});
