import { createHash, createSign, generateKeyPairSync, randomBytes } from 'node:crypto';

/** An authenticator in software (WebAuthn level 2, ES256, attestation none): what a phone would answer, and answers a phone would not give. */
export interface SoftwarePasskey {
	id: string;
	make: (challenge: string, origin: string, rpID: string) => MadeAnswer;
	show: (challenge: string, origin: string, rpID: string, said?: { count?: number; isUserVerified?: boolean }) => ShownAnswer;
}

interface Answer<Response> {
	id: string;
	rawId: string;
	type: 'public-key';
	clientExtensionResults: Record<string, never>;
	response: Response;
}
type MadeAnswer = Answer<{ clientDataJSON: string; attestationObject: string; transports: string[] }>;
type ShownAnswer = Answer<{ clientDataJSON: string; authenticatorData: string; signature: string }>;

const base64url = (bytes: Uint8Array) => Buffer.from(bytes).toString('base64url');
const sha256 = (bytes: Uint8Array | string) => createHash('sha256').update(bytes).digest();

/** CBOR (RFC 8949) of what is needed here: short texts, byte strings, small integers, maps. */
function head(major: number, value: number): Buffer {
	if (value < 24) return Buffer.from([(major << 5) | value]);
	if (value < 256) return Buffer.from([(major << 5) | 24, value]);
	return Buffer.from([(major << 5) | 25, value >> 8, value & 255]);
}
function cbor(value: number | string | Uint8Array | Map<number | string, unknown>): Buffer {
	if (typeof value === 'number') return value >= 0 ? head(0, value) : head(1, -1 - value);
	if (typeof value === 'string') return Buffer.concat([head(3, Buffer.byteLength(value)), Buffer.from(value)]);
	if (value instanceof Map)
		return Buffer.concat([head(5, value.size), ...[...value].flatMap(([key, of]) => [cbor(key), cbor(of as never)])]);
	return Buffer.concat([head(2, value.length), value]);
}

export function softwarePasskey(): SoftwarePasskey {
	const { privateKey, publicKey } = generateKeyPairSync('ec', { namedCurve: 'P-256' });
	const { x = '', y = '' } = publicKey.export({ format: 'jwk' });
	const rawId = randomBytes(32);
	const id = base64url(rawId);
	const clientData = (type: string, challenge: string, origin: string) =>
		Buffer.from(JSON.stringify({ type, challenge, origin, crossOrigin: false }));
	const authenticatorData = (rpID: string, flags: number, count: number) => {
		const counter = Buffer.alloc(4);
		counter.writeUInt32BE(count);
		return Buffer.concat([sha256(rpID), Buffer.from([flags]), counter]);
	};
	const base = { id, rawId: id, type: 'public-key' as const, clientExtensionResults: {} };
	let counted = 0;
	return {
		id,
		make: (challenge, origin, rpID) => {
			const key = cbor(
				new Map<number, number | Buffer>([
					[1, 2],
					[3, -7],
					[-1, 1],
					[-2, Buffer.from(x, 'base64url')],
					[-3, Buffer.from(y, 'base64url')],
				]),
			);
			// User present, verified, and a credential is attached.
			const data = Buffer.concat([authenticatorData(rpID, 0x45, 0), Buffer.alloc(16), Buffer.from([0, rawId.length]), rawId, key]);
			const attestation = cbor(
				new Map<string, string | Map<string, never> | Buffer>([
					['fmt', 'none'],
					['attStmt', new Map<string, never>()],
					['authData', data],
				]),
			);
			const response = {
				clientDataJSON: base64url(clientData('webauthn.create', challenge, origin)),
				attestationObject: base64url(attestation),
				transports: ['internal'],
			};
			return { ...base, response };
		},
		show: (challenge, origin, rpID, { count, isUserVerified = true } = {}) => {
			counted = count ?? counted + 1;
			const data = authenticatorData(rpID, isUserVerified ? 0x05 : 0x01, counted);
			const client = clientData('webauthn.get', challenge, origin);
			const signature = createSign('SHA256')
				.update(Buffer.concat([data, sha256(client)]))
				.sign(privateKey);
			return {
				...base,
				response: { clientDataJSON: base64url(client), authenticatorData: base64url(data), signature: base64url(signature) },
			};
		},
	};
}
