import { stat } from 'node:fs/promises';
import { join } from 'node:path';
import { and, eq, isNull } from 'drizzle-orm';
import type { Transaction } from '../db/database.ts';
import { files, uploads } from '../db/schema/file.ts';
import type { KeptFile, Member, Platform } from './platform.ts';
import { Conflict, foundOne, Refused } from './refuse.ts';

/** What a command gets of an upload: where its bytes lie, what the person called it, how long it is. */
export interface TakenUpload {
	path: string;
	fileName: string;
	bytes: number;
}

/** Ids are made by us; this keeps a made-up one from naming a path. */
export const uploadIdPattern = /^[0-9a-f]{32}$/;

export function uploadPath(uploadFolder: string, uploadId: string): string {
	if (!uploadIdPattern.test(uploadId)) throw new Refused('bad-upload', 'This is not an upload of ours.', 'uploadId');
	return join(uploadFolder, uploadId);
}

/**
 * The upload that this member began on this site, finished and not used yet; else NOT_FOUND or REFUSED. Taking it changes nothing:
 * a command that refuses the file's content may be tried again with other settings. Then `platform.files.keepFrom(path)`, and
 * `useUpload` inside the transaction.
 */
export async function takeUpload(platform: Platform, member: Member, uploadId: string): Promise<TakenUpload> {
	const path = uploadPath(platform.uploadFolder, uploadId);
	const upload = foundOne(
		await platform.db
			.select()
			.from(uploads)
			.where(and(eq(uploads.id, uploadId), eq(uploads.siteId, member.siteId), eq(uploads.userId, member.userId))),
	);
	if (upload.usedAt !== null) throw new Refused('upload-used', 'This file was already put to use. Send it again.', 'uploadId');
	// The note of the end may have been lost with the connection: the bytes on the disk tell.
	const found = await stat(path).catch(() => null);
	if (found === null) throw new Refused('upload-gone', 'This file is no longer here. Send it again.', 'uploadId');
	if (found.size !== upload.bytes) throw new Refused('upload-unfinished', 'This file has not arrived whole yet.', 'uploadId');
	return { path, fileName: upload.fileName, bytes: upload.bytes };
}

/** Notes the kept bytes and that the upload is used up, inside the command's transaction. CONFLICT where another command was quicker. */
export async function useUpload(tx: Transaction, uploadId: string, kept: KeptFile, now: Date): Promise<void> {
	await rememberFile(tx, kept, now);
	const used = await tx
		.update(uploads)
		.set({ usedAt: now, sha256: kept.sha256 })
		.where(and(eq(uploads.id, uploadId), isNull(uploads.usedAt)))
		.returning({ id: uploads.id });
	if (used.length === 0) throw new Conflict('This file was just put to use elsewhere.');
}

/** The row that other rows name a kept file by; the same bytes twice are one row. */
export async function rememberFile(tx: Transaction, kept: KeptFile, now: Date): Promise<void> {
	await tx
		.insert(files)
		.values({ ...kept, keptAt: now })
		.onConflictDoNothing();
}
