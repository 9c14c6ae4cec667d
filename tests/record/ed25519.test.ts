import { createPrivateKey, createPublicKey, sign, verify } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import { bytesOfHex, hexOf, publicKeyPem, readPublicKeys } from '#shared/record/public-key.ts';
import { strictEd25519 as strict } from '#shared/record/strict-ed25519.ts';

/** RFC 8032, 7.1: secret key, public key, message, signature. Node's own implementation must give the same, so no letter of them is ours. */
const vectors = [
	[
		'9d61b19deffd5a60ba844af492ec2cc44449c5697b326919703bac031cae7f60',
		'd75a980182b10ab7d54bfed3c964073a0ee172f3daa62325af021a68f707511a',
		'',
		'e5564300c360ac729086e2cc806e828a84877f1eb8e5d974d873e065224901555fb8821590a33bacc61e39701cf9b46bd25bf5f0595bbe24655141438e7a100b',
	],
	[
		'4ccd089b28ff96da9db6c346ec114e0f5b8a319f35aba624da8cf6ed4fb8a6fb',
		'3d4017c3e843895a92b70aa74d1b7ebc9c982ccf2ec4968cc0cd55f12af4660c',
		'72',
		'92a009a9f0d4cab8720e820b5f642540a2b27b5416503f8fb3762223ebdb69da085ac1e43e15996e458f3613d0f11d8c387b2eaeb4302aeeb00d291612bb0c00',
	],
	[
		'c5aa8df43f9f837bedb7442f31dcb7b166d38535076f094b85ce3a2e0b4458f7',
		'fc51cd8e6218a1a38da47ed00230f0580816ed13ba3303ac5deb911548908025',
		'af82',
		'6291d657deec24024827e69c3abe01a30ce548a284743a445e3680d7db5ac3ac18ff9b538d16f290ae67f760984dc6594a7c15e9716ed28dc027beceea1ec40a',
	],
	[
		'833fe62409237b9d62ec77587520911e9a759cec1d19755b7da901b96dca3d42',
		'ec172b93ad5e563bf4932c70e1245034c35467ef2efd4d64ebf819683467e2bf',
		'ddaf35a193617abacc417349ae20413112e6fa4e89a97ea20a9eeee64b55d39a2192992a274fc1a836ba3c23a3feebbd454d4423643ce80e2a9ac94fa54ca49f',
		'dc2a4459e7369633a52b1bf277839a00201009a3efbf3ecb69bea2186c26b58909351fc9ac90b3ecfdfbc7c66431e0303dca179c138ac17ad9bef1177331a704',
	],
] as const;

/** The order of the base point (RFC 8032, 5.1). */
const order = 2n ** 252n + 27742317777372353535851937790883648493n;
/** Points of order 1, 2, 4 and 8, in their one encoding (either sign of x): every point that the cofactor takes to the neutral one. */
const smallOrder = [
	`01${'00'.repeat(31)}`,
	`ec${'ff'.repeat(30)}7f`,
	'00'.repeat(32),
	`${'00'.repeat(31)}80`,
	'26e8958fc2b227b045c3f489f2ef98f0d5dfac05d3c63339b13802886d53fc05',
	'26e8958fc2b227b045c3f489f2ef98f0d5dfac05d3c63339b13802886d53fc85',
	'c7176a703d4dd84fba3c0b760d10670f2a2053fa2c39ccc64ec7fd7792ac037a',
	'c7176a703d4dd84fba3c0b760d10670f2a2053fa2c39ccc64ec7fd7792ac03fa',
];
/** y ≥ p, x = 0 with a sign, and a y that is on no point. */
const noEncoding = [
	`ed${'ff'.repeat(30)}7f`,
	`ee${'ff'.repeat(30)}7f`,
	`${'ff'.repeat(32)}`,
	`01${'00'.repeat(30)}80`,
	`02${'00'.repeat(31)}`,
];

const pkcs8 = (secret: string) => Buffer.concat([Buffer.from('302e020100300506032b657004220420', 'hex'), Buffer.from(secret, 'hex')]);

describe('Ed25519', () => {
	it.each(vectors)('takes the published signature by %s and no other', (secret, publicHex, messageHex, signatureHex) => {
		const key = createPrivateKey({ key: pkcs8(secret), format: 'der', type: 'pkcs8' });
		const message = bytesOfHex(messageHex);
		expect(hexOf(sign(null, message, key))).toBe(signatureHex);
		expect(createPublicKey(key).export({ type: 'spki', format: 'der' }).subarray(12).toString('hex')).toBe(publicHex);
		const [point, signature] = [bytesOfHex(publicHex), bytesOfHex(signatureHex)];
		expect(strict.whyNoKey(point)).toBeNull();
		expect(strict.isSigned({ point, message, signature })).toBe(true);
		for (const index of [0, 31, 32, 63]) {
			const changed = signature.slice();
			changed[index] = changed[index]! ^ 1;
			expect(strict.isSigned({ point, message, signature: changed })).toBe(false);
		}
		expect(strict.isSigned({ point, message: Uint8Array.of(...message, 0), signature })).toBe(false);
	});

	it('refuses S + L, which is the same point written twice', () => {
		const [, publicHex, messageHex, signatureHex] = vectors[1];
		const signature = bytesOfHex(signatureHex);
		let s = order;
		for (let index = 0; index < 32; index += 1) s += BigInt(signature[32 + index]!) << BigInt(8 * index);
		for (let index = 0; index < 32; index += 1) signature[32 + index] = Number((s >> BigInt(8 * index)) & 255n);
		expect(strict.isSigned({ point: bytesOfHex(publicHex), message: bytesOfHex(messageHex), signature })).toBe(false);
	});

	it.each(smallOrder)('refuses the key of small order %s, by which anybody signs', (hex) => {
		const point = bytesOfHex(hex);
		expect(strict.whyNoKey(point)).not.toBeNull();
		// R neutral, S = 0: with a key of small order this is a signature of one message in eight or of all.
		const signature = bytesOfHex(`01${'00'.repeat(63)}`);
		for (let text = 0; text < 16; text += 1) expect(strict.isSigned({ point, message: Uint8Array.of(text), signature })).toBe(false);
	});

	it('guards against what the platform alone would take', () => {
		const key = createPublicKey(publicKeyPem(bytesOfHex(smallOrder[0]!)));
		expect(verify(null, Buffer.from('anything'), key, Buffer.from(`01${'00'.repeat(63)}`, 'hex'))).toBe(true);
	});

	it.each(noEncoding)('refuses the key %s, which encodes no point', (hex) => {
		expect(strict.whyNoKey(bytesOfHex(hex))).not.toBeNull();
	});
});

describe('public keys', () => {
	it('are read from PEM, several of a file, and written back', async () => {
		const points = [vectors[0][1], vectors[1][1]].map(bytesOfHex);
		const read = await readPublicKeys(points.map(publicKeyPem).join('\n'));
		expect(read.map(({ point }) => hexOf(point))).toEqual(points.map(hexOf));
		expect(createPublicKey(publicKeyPem(points[0]!)).asymmetricKeyType).toBe('ed25519');
	});

	it.each([
		'',
		'no key',
		'-----BEGIN PUBLIC KEY-----\nAAAA\n-----END PUBLIC KEY-----',
		'-----BEGIN PUBLIC KEY-----\n*\n-----END PUBLIC KEY-----',
	])('are refused where there is none: %j', async (pem) => {
		await expect(readPublicKeys(pem)).rejects.toThrow(/key/);
	});
});
