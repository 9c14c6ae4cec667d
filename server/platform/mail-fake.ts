import { createHash, randomBytes, randomUUID } from 'node:crypto';
import { mkdir, readdir, readFile, rename, rm, writeFile } from 'node:fs/promises';
import { createServer, type IncomingMessage } from 'node:http';
import { join } from 'node:path';
import { z } from 'zod';
import type { Mailbox } from './mail.ts';

/** A mail service of our own on this machine: what it is given it keeps in a folder, for the mailbox page. It sends nothing anywhere. */
export interface FakeMailService {
	baseUrl: string;
	apiKey: string;
	mailbox: Mailbox;
	close: () => Promise<void>;
}

const largestBytes = 1_000_000;
/** Older ones go. */
const mostKept = 200;

const asked = z.object({
	from: z.string(),
	to: z.union([z.string(), z.array(z.string()).length(1)]).transform((to) => [to].flat().join('')),
	subject: z.string(),
	text: z.string(),
	html: z.string(),
});
const keptMail = z.object({
	keptId: z.string(),
	idempotencyKey: z.string().nullable(),
	bodySha256: z.string(),
	to: z.string(),
	subject: z.string(),
	text: z.string(),
	html: z.string(),
	at: z.coerce.date(),
});
type Kept = z.infer<typeof keptMail>;

interface Answer {
	status: number;
	body: object;
}

/**
 * Answers `POST /emails` on a port of its own that only this machine reaches, as the service's documentation says: bearer key, the same
 * idempotency key twice is one mail and the same answer, with another body it is a conflict. Kept over a restart.
 */
export async function startFakeMailService(folder: string): Promise<FakeMailService> {
	await mkdir(folder, { recursive: true });
	const apiKey = `re_local_${randomBytes(24).toString('base64url')}`;
	let kept = await readKept(folder);

	const take = async (request: IncomingMessage): Promise<Answer> => {
		if (request.method !== 'POST' || request.url !== '/emails') return refusal(404, 'not_found', 'There is no such endpoint.');
		if (request.headers.authorization !== `Bearer ${apiKey}`) return refusal(401, 'invalid_api_key', 'The API key is invalid.');
		const body = await readBody(request);
		if (body === null) return refusal(413, 'validation_error', 'The mail is too large.');
		const mail = asked.safeParse(jsonOf(body));
		if (!mail.success) return refusal(422, 'validation_error', 'A field is missing or has the wrong form.');
		const bodySha256 = createHash('sha256').update(body).digest('hex');
		const idempotencyKey = request.headers['idempotency-key']?.toString() ?? null;
		const before = idempotencyKey === null ? undefined : kept.find((one) => one.idempotencyKey === idempotencyKey);
		if (before !== undefined) {
			return before.bodySha256 === bodySha256
				? { status: 200, body: { id: before.keptId } }
				: refusal(409, 'invalid_idempotent_request', 'The same idempotency key was used with another body.');
		}
		const { to, subject, text, html } = mail.data;
		const one: Kept = { keptId: randomUUID(), idempotencyKey, bodySha256, to, subject, text, html, at: new Date() };
		// In memory first: a second request of the same key in this moment must find it.
		const gone = [one, ...kept].slice(mostKept);
		kept = [one, ...kept].slice(0, mostKept);
		await writeKept(folder, one);
		for (const old of gone) await rm(fileOf(folder, old.keptId), { force: true });
		return { status: 200, body: { id: one.keptId } };
	};

	const server = createServer((request, response) => {
		take(request)
			.catch((error: unknown) => {
				console.error('The local mail service failed:', error);
				return refusal(500, 'application_error', 'The local mail service failed.');
			})
			.then(({ status, body }) => response.writeHead(status, { 'content-type': 'application/json' }).end(JSON.stringify(body)));
	});
	await new Promise<void>((resolve, reject) => {
		server.once('error', reject).listen(0, '127.0.0.1', () => resolve());
	});
	const bound = server.address();
	if (bound === null || typeof bound === 'string') throw new Error('The local mail service has no port.');
	return {
		baseUrl: `http://127.0.0.1:${bound.port}`,
		apiKey,
		mailbox: { list: async () => kept.map(({ keptId, to, subject, text, html, at }) => ({ keptId, to, subject, text, html, at })) },
		close: () =>
			new Promise((resolve) => {
				server.close(() => resolve());
				server.closeAllConnections();
			}),
	};
}

function refusal(statusCode: number, name: string, message: string): Answer {
	return { status: statusCode, body: { statusCode, name, message } };
}

function jsonOf(body: string): unknown {
	try {
		return JSON.parse(body);
	} catch {
		return null;
	}
}

async function readBody(request: IncomingMessage): Promise<string | null> {
	const parts: Buffer[] = [];
	let bytes = 0;
	for await (const part of request) {
		bytes += part.length;
		if (bytes > largestBytes) return null;
		parts.push(part);
	}
	return Buffer.concat(parts).toString('utf8');
}

function fileOf(folder: string, keptId: string): string {
	return join(folder, `${keptId}.json`);
}

async function writeKept(folder: string, one: Kept): Promise<void> {
	const beside = `${fileOf(folder, one.keptId)}.part`;
	await writeFile(beside, JSON.stringify(one), { mode: 0o600 });
	await rename(beside, fileOf(folder, one.keptId));
}

async function readKept(folder: string): Promise<Kept[]> {
	const names = (await readdir(folder)).filter((name) => name.endsWith('.json'));
	const read = await Promise.all(names.map(async (name) => keptMail.safeParse(jsonOf(await readFile(join(folder, name), 'utf8')))));
	return read.flatMap((one) => (one.success ? [one.data] : [])).sort((one, other) => other.at.getTime() - one.at.getTime());
}
