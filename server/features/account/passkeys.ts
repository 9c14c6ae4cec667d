import {
	type AuthenticationResponseJSON,
	generateAuthenticationOptions,
	generateRegistrationOptions,
	type RegistrationResponseJSON,
	verifyAuthenticationResponse,
	verifyRegistrationResponse,
} from '@simplewebauthn/server';
import { and, asc, eq, gt, lte } from 'drizzle-orm';
import type { z } from 'zod';
import type { madePasskey, Passkey, shownPasskey } from '#shared/account/factors-contract.ts';
import type { Handle, Transaction } from '../../db/database.ts';
import { challenges, passkeys, users } from '../../db/schema/account.ts';
import { isUniqueViolation } from '../../db/unique-violation.ts';
import { audit } from '../../platform/audit.ts';
import type { Platform, SignedIn } from '../../platform/platform.ts';
import { postMail } from '../../platform/post-mail.ts';
import { foundOne, Refused } from '../../platform/refuse.ts';
import { factorLetter } from './password-letters.ts';

type World = Pick<Platform, 'newId' | 'now' | 'publicUrl'>;
type ChallengeKind = (typeof challenges.$inferSelect)['kind'];
export interface PasskeyAsk {
	challengeId: string;
	options: Record<string, unknown>;
}

const holdsMs = 5 * 60_000;
const mostPasskeys = 20;

/**
 * Whom passkeys are bound to, from the configured address, never from a request. They need a name: of an address by number only this very
 * machine's has one. Null: there can be none.
 */
export function relyingParty(publicUrl: string): { rpID: string; origin: string } | null {
	const url = new URL(publicUrl);
	if (['127.0.0.1', '[::1]'].includes(url.hostname)) url.hostname = 'localhost';
	if (/^[\d.]+$|^\[/.test(url.hostname)) return null;
	return { rpID: url.hostname, origin: url.origin };
}

function partyOf({ publicUrl }: World): { rpID: string; origin: string } {
	const party = relyingParty(publicUrl());
	if (party === null) throw new Refused('no-passkeys', 'Passkeys need a server with a name; this one is known by a number alone.');
	return party;
}

async function keepChallenge(
	tx: Transaction,
	world: World,
	kind: ChallengeKind,
	userId: string | null,
	challenge: string,
): Promise<string> {
	const id = world.newId();
	const now = world.now();
	await tx.delete(challenges).where(lte(challenges.expiresAt, now));
	await tx.insert(challenges).values({ id, kind, userId, challenge, expiresAt: new Date(now.getTime() + holdsMs) });
	return id;
}

/** The challenge, gone from now on, whether or not what was signed over it is right. Null where it is used, over or of somebody else. */
async function takeChallenge(
	db: Handle,
	now: Date,
	kind: ChallengeKind,
	challengeId: string,
	userId: string | null,
): Promise<string | null> {
	const [taken] = await db
		.delete(challenges)
		.where(and(eq(challenges.id, challengeId), eq(challenges.kind, kind), gt(challenges.expiresAt, now)))
		.returning({ challenge: challenges.challenge, userId: challenges.userId });
	return taken === undefined || taken.userId !== userId ? null : taken.challenge;
}

/** What the browser makes a passkey with; those the person has are named, so that no device makes a second. */
export async function beginPasskey(tx: Transaction, world: World, person: SignedIn): Promise<PasskeyAsk> {
	const { rpID } = partyOf(world);
	const had = await tx.select().from(passkeys).where(eq(passkeys.userId, person.userId));
	if (had.length >= mostPasskeys) throw new Refused('too-many-passkeys', `At most ${mostPasskeys} passkeys. Remove one first.`);
	const options = await generateRegistrationOptions({
		rpName: 'Batterboard',
		rpID,
		userName: person.email,
		userDisplayName: person.name,
		userID: new Uint8Array(Buffer.from(person.userId)),
		attestationType: 'none',
		excludeCredentials: had.map(({ id }) => ({ id })),
		authenticatorSelection: { residentKey: 'required', userVerification: 'required' },
	});
	return { challengeId: await keepChallenge(tx, world, 'add', person.userId, options.challenge), options: { ...options } };
}

/** Keeps a passkey whose answer is right; null where it is not. The challenge is used up either way. */
export async function addPasskey(
	platform: Platform,
	person: SignedIn,
	{ challengeId, name, response }: { challengeId: string; name: string; response: z.output<typeof madePasskey> },
): Promise<Passkey | null> {
	const { rpID, origin } = partyOf(platform);
	const challenge = await takeChallenge(platform.db, platform.now(), 'add', challengeId, person.userId);
	if (challenge === null) return null;
	const verified = await verifyRegistrationResponse({
		response: response as RegistrationResponseJSON,
		expectedChallenge: challenge,
		expectedOrigin: origin,
		expectedRPID: rpID,
		requireUserVerification: true,
	}).catch(() => null);
	if (!verified?.verified || verified.registrationInfo === undefined) return null;
	const { id, publicKey, counter } = verified.registrationInfo.credential;
	const row = {
		id,
		userId: person.userId,
		name,
		publicKey: Buffer.from(publicKey).toString('base64url'),
		counter,
		transports: response.response.transports ?? [],
		createdAt: platform.now(),
		lastUsedAt: null,
	};
	try {
		await platform.transaction(async (tx) => {
			await tx.insert(passkeys).values(row);
			await audit(tx, person, { kind: 'passkey-added', subjectId: person.userId, data: { name } });
			const letter = factorLetter(platform.publicUrl(), 'A passkey was added');
			await postMail(tx, { to: person.email, letter, now: platform.now() });
		});
	} catch (error) {
		if (isUniqueViolation(error, 'passkeys_pkey')) throw new Refused('known-passkey', 'This passkey is kept already.');
		throw error;
	}
	return summaryOf(row);
}

/** Ends one of the person's own; NOT_FOUND for any other. */
export async function removePasskey(tx: Transaction, { now, publicUrl }: World, person: SignedIn, passkeyId: string): Promise<void> {
	const { name } = foundOne(
		await tx
			.delete(passkeys)
			.where(and(eq(passkeys.userId, person.userId), eq(passkeys.id, passkeyId)))
			.returning({ name: passkeys.name }),
	);
	await audit(tx, person, { kind: 'passkey-removed', subjectId: person.userId, data: { name } });
	await postMail(tx, { to: person.email, letter: factorLetter(publicUrl(), 'A passkey was removed'), now: now() });
}

/** What any passkey of this server may sign (`sign-in`), or one of this person's (`again`). No list of them goes out: it would tell who has one. */
export async function askPasskey(tx: Transaction, world: World, kind: 'sign-in' | 'again', userId: string | null): Promise<PasskeyAsk> {
	const options = await generateAuthenticationOptions({ rpID: partyOf(world).rpID, userVerification: 'required' });
	return { challengeId: await keepChallenge(tx, world, kind, userId, options.challenge), options: { ...options } };
}

/**
 * Whose passkey signed the challenge; null where none of ours did, or another than the one the challenge was made for. Of a passkey that
 * counts, a count that does not rise (a copy) opens nothing.
 */
export async function whoShowed(
	platform: Platform,
	kind: 'sign-in' | 'again',
	{ challengeId, response }: { challengeId: string; response: z.output<typeof shownPasskey> },
	userId: string | null,
): Promise<SignedIn | null> {
	const { rpID, origin } = partyOf(platform);
	const challenge = await takeChallenge(platform.db, platform.now(), kind, challengeId, userId);
	if (challenge === null) return null;
	const [found] = await platform.db
		.select({ key: passkeys, name: users.name, email: users.email })
		.from(passkeys)
		.innerJoin(users, eq(users.id, passkeys.userId))
		.where(eq(passkeys.id, response.id));
	if (found === undefined || (userId !== null && found.key.userId !== userId)) return null;
	const { key, name, email } = found;
	const verified = await verifyAuthenticationResponse({
		response: response as AuthenticationResponseJSON,
		expectedChallenge: challenge,
		expectedOrigin: origin,
		expectedRPID: rpID,
		requireUserVerification: true,
		credential: { id: key.id, publicKey: new Uint8Array(Buffer.from(key.publicKey, 'base64url')), counter: key.counter },
	}).catch(() => null);
	if (!verified?.verified) return null;
	const counted = await platform.db
		.update(passkeys)
		.set({ counter: verified.authenticationInfo.newCounter, lastUsedAt: platform.now() })
		.where(and(eq(passkeys.id, key.id), eq(passkeys.counter, key.counter)))
		.returning({ id: passkeys.id });
	return counted.length === 0 ? null : { userId: key.userId, name, email };
}

/** The person's own, by age. */
export async function passkeysOf(db: Handle, userId: string): Promise<Passkey[]> {
	const rows = await db.select().from(passkeys).where(eq(passkeys.userId, userId)).orderBy(asc(passkeys.createdAt));
	return rows.map(summaryOf);
}

function summaryOf({ id, name, createdAt, lastUsedAt }: typeof passkeys.$inferSelect): Passkey {
	return { passkeyId: id, name, createdAt, lastUsedAt };
}
