import { AsyncLocalStorage } from 'node:async_hooks';
import { randomBytes } from 'node:crypto';
import { mkdirSync } from 'node:fs';
import { readdir, rm, statfs } from 'node:fs/promises';
import type { IncomingMessage, ServerResponse } from 'node:http';
import { join } from 'node:path';
import { FileStore } from '@tus/file-store';
import { Server } from '@tus/server';
import { and, eq, isNull, lt } from 'drizzle-orm';
import { siteInput } from '#shared/base-contract.ts';
import { mayWith, type SitePermission } from '#shared/permissions.ts';
import { uploads } from '../db/schema/file.ts';
import { memberOf } from './membership.ts';
import type { Member, Platform, SignedIn } from './platform.ts';
import { uploadIdPattern } from './uploads.ts';

/** Who may bring any kind of file may begin an upload; the command that takes it asks for the right permission. */
const anyOf: readonly SitePermission[] = ['model.write', 'control.write', 'survey.write'];
/** Photos and points of one's own: whoever may speak on a flag brings those, and nothing larger. */
const besideFlags: SitePermission = 'flag.comment';
const largestBesideFlagsBytes = 30_000_000;
/** Left free on the disk beside what was announced. */
const spareBytes = 500_000_000;
/** An upload that nobody used for so long is removed at the next start. */
const staleMs = 7 * 24 * 3_600_000;

export interface UploadServer {
	handle: (request: IncomingMessage, response: ServerResponse, signedIn: SignedIn | null) => Promise<void>;
	/** Removes what was used, and what was left lying. */
	sweep: () => Promise<void>;
}

/** Resumable uploads (tus 1.0) at `path`, for members only, each upload only for whoever began it. */
export function openUploads({ platform, path, largestBytes }: { platform: Platform; path: string; largestBytes: number }): UploadServer {
	mkdirSync(platform.uploadFolder, { recursive: true });
	const asking = new AsyncLocalStorage<SignedIn | null>();
	const asker = (): SignedIn => asking.getStore() ?? refuse(401, 'Sign in first.');

	const tus = new Server({
		path,
		datastore: new FileStore({ directory: platform.uploadFolder }),
		maxSize: largestBytes,
		relativeLocation: true,
		disableTerminationForFinishedUploads: true,
		allowedOrigins: () => false,
		namingFunction: () => randomBytes(16).toString('hex'),
		onIncomingRequest: async (request, uploadId) => {
			const signedIn = asker();
			if (request.method === 'GET') refuse(405, 'An upload is sent here, not fetched.');
			if (request.method !== 'POST') await ownUpload(platform, signedIn, uploadId);
		},
		onUploadCreate: async (_request, upload) => {
			const signedIn = asker();
			const member = await bringer(platform, signedIn, upload.metadata?.siteId);
			const bytes = upload.size ?? refuse(400, 'Say how long the file is.');
			if (!bringsAnyFile(member) && bytes > largestBesideFlagsBytes)
				refuse(
					413,
					`${cleanFileName(upload.metadata?.filename)} has ${Math.ceil(bytes / 1e6)} MB; at most ${largestBesideFlagsBytes / 1e6} are taken here. Nothing was kept.`,
				);
			await refuseFullDisk(platform.uploadFolder, bytes);
			const fileName = cleanFileName(upload.metadata?.filename);
			await platform.db.insert(uploads).values({
				id: upload.id,
				siteId: member.siteId,
				userId: signedIn.userId,
				fileName,
				bytes,
				begunAt: platform.now(),
				finishedAt: null,
			});
			return { metadata: { filename: fileName, siteId: member.siteId } };
		},
		onUploadFinish: async (_request, upload) => {
			await platform.db.update(uploads).set({ finishedAt: platform.now() }).where(eq(uploads.id, upload.id));
			return {};
		},
		onResponseError: (_request, error) => {
			if (!(error instanceof Error)) return undefined;
			console.error('An upload failed:', error);
			return { status_code: 500, body: 'The server could not take this. Try again.\n' };
		},
	});
	return {
		handle: (request, response, signedIn) => asking.run(signedIn, () => tus.handle(request, response)),
		sweep: async () => {
			const before = new Date(platform.now().getTime() - staleMs);
			await platform.db.delete(uploads).where(and(isNull(uploads.usedAt), lt(uploads.begunAt, before)));
			const waiting = await platform.db.select({ id: uploads.id }).from(uploads).where(isNull(uploads.usedAt));
			const keep = new Set(waiting.flatMap(({ id }) => [id, `${id}.json`]));
			for (const file of await readdir(platform.uploadFolder)) {
				if (!keep.has(file)) await rm(join(platform.uploadFolder, file), { force: true });
			}
		},
	};
}

function refuse(status_code: number, sentence: string): never {
	// The shape that the tus server sends on to the client.
	throw { status_code, body: `${sentence}\n` };
}

async function ownUpload(platform: Platform, signedIn: SignedIn, uploadId: string): Promise<void> {
	const notThere = () => refuse(404, 'There is no such upload, or it is not yours.');
	if (!uploadIdPattern.test(uploadId)) return notThere();
	const [upload] = await platform.db
		.select({ siteId: uploads.siteId })
		.from(uploads)
		.where(and(eq(uploads.id, uploadId), eq(uploads.userId, signedIn.userId), isNull(uploads.usedAt)));
	if (upload === undefined) return notThere();
	await bringer(platform, signedIn, upload.siteId);
}

async function bringer(platform: Platform, signedIn: SignedIn, siteId: string | null | undefined): Promise<Member> {
	const site = siteInput.safeParse({ siteId });
	const member = site.success ? await memberOf(platform.db, signedIn, site.data.siteId, platform.now()) : null;
	if (member === null) return refuse(404, 'There is no such site, or it is not yours to see.');
	if (!bringsAnyFile(member) && !mayWith(member.roles, besideFlags)) return refuse(403, 'Your role on this site does not allow this.');
	return member;
}

const bringsAnyFile = ({ roles }: Member): boolean => anyOf.some((permission) => mayWith(roles, permission));

async function refuseFullDisk(folder: string, bytes: number): Promise<void> {
	const { bavail, bsize } = await statfs(folder);
	if (bavail * bsize < bytes + spareBytes) refuse(507, 'There is not enough room on the server for this file.');
}

/** The person's name for it, shown and never used as a path. */
function cleanFileName(given: string | null | undefined): string {
	const last = (given ?? '').split(/[\\/]/).at(-1) ?? '';
	const clean = last.replace(/[\p{Cc}\u202a-\u202e\u2066-\u2069]/gu, '').trim();
	return clean === '' ? 'unnamed' : clean.slice(-160);
}
