import { createHash, randomBytes } from 'node:crypto';

/** What a link in a mail holds: 32 random bytes. Only the hash is kept, so that who reads the table cannot make the link. */
export function newSecretToken(): { token: string; tokenHash: string } {
	const token = randomBytes(32).toString('base64url');
	return { token, tokenHash: hashOfToken(token) };
}

/** SHA-256 in hexadecimal. The token is as long as the hash: there is nothing to guess, so a slow hash would add nothing. */
export function hashOfToken(token: string): string {
	return createHash('sha256').update(token).digest('hex');
}
