import { readFile } from 'node:fs/promises';
import { asc, eq } from 'drizzle-orm';
import type { FlagPhoto } from '#shared/flag/contract.ts';
import { mayComment } from '#shared/flag/may-act.ts';
import { users } from '../../db/schema/account.ts';
import { flagPhotos } from '../../db/schema/flag.ts';
import { isUniqueViolation } from '../../db/unique-violation.ts';
import { audit } from '../../platform/audit.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { Forbidden, foundOne, Refused } from '../../platform/refuse.ts';
import { runInThread } from '../../platform/run-in-thread.ts';
import { rememberFile, takeUpload, useUpload } from '../../platform/uploads.ts';
import { largestPhotoBytes, type PhotoCopy } from './copy-photo.ts';
import type { FlagRow } from './flag-rows.ts';

type PhotoRow = typeof flagPhotos.$inferSelect;

/** The flag's photos, oldest first, each with an address that holds for minutes. */
export async function photosOf({ db, photoAddresses }: Platform, flagId: string): Promise<FlagPhoto[]> {
	const rows = await db
		.select({ row: flagPhotos, by: users.name })
		.from(flagPhotos)
		.innerJoin(users, eq(users.id, flagPhotos.addedBy))
		.where(eq(flagPhotos.flagId, flagId))
		.orderBy(asc(flagPhotos.addedAt));
	return rows.map(({ row, by }) => photoOf(row, by, photoAddresses));
}

function photoOf(row: PhotoRow, by: string, photoAddresses: Platform['photoAddresses']): FlagPhoto {
	const { id, originalSha256, shownSha256, format, widthPx, heightPx, addedAt } = row;
	const type = format === 'png' ? ('image/png' as const) : ('image/jpeg' as const);
	return {
		photoId: id,
		shownAt: shownSha256 === null ? null : photoAddresses.of({ sha256: shownSha256, type }),
		originalSha256,
		format,
		widthPx,
		heightPx,
		addedBy: by,
		addedAt,
	};
}

/**
 * Adds a photo to a flag: the original as it came, by its hash, and a copy to show without its place. Refused by content, size and pixels,
 * before anything is kept; REFUSED where the flag has that very photo already.
 */
export async function addPhoto(platform: Platform, member: Member, flag: FlagRow, uploadId: string): Promise<FlagPhoto> {
	if (!mayComment(member, flag)) throw new Forbidden();
	const upload = await takeUpload(platform, member, uploadId);
	if (upload.bytes > largestPhotoBytes)
		throw new Refused(
			'photo-too-large',
			`${upload.fileName} has ${Math.round(upload.bytes / 1e6)} MB; at most ${largestPhotoBytes / 1e6} are taken. Nothing was kept.`,
			'uploadId',
		);
	const bytes = await readFile(upload.path);
	const copy = await runInThread<{ bytes: Uint8Array }, PhotoCopy>({ file: './copy-photo.worker.ts', from: import.meta.url }, { bytes });
	if (!copy.ok) throw new Refused(copy.code, `${upload.fileName}: ${copy.message}`, 'uploadId');
	const original = await platform.photos.keep(bytes);
	const shown = await platform.photos.keep(copy.shown);
	const row: PhotoRow = {
		id: platform.newId(),
		siteId: member.siteId,
		flagId: flag.id,
		originalSha256: original.sha256,
		shownSha256: shown.sha256,
		format: copy.format,
		widthPx: copy.widthPx,
		heightPx: copy.heightPx,
		addedBy: member.userId,
		addedAt: platform.now(),
	};
	try {
		await platform.transaction(async (tx) => {
			await rememberFile(tx, shown, row.addedAt);
			await useUpload(tx, uploadId, original, row.addedAt);
			await tx.insert(flagPhotos).values(row);
			const data = { number: flag.number, format: copy.format, originalSha256: original.sha256, shownSha256: shown.sha256 };
			await audit(tx, member, { kind: 'flag-photo-added', subjectId: flag.id, data });
		});
	} catch (error) {
		if (!isUniqueViolation(error, 'flag_photos_once')) throw error;
		throw new Refused('photo-there', `Flag ${flag.number} has this very photo already.`, 'uploadId');
	}
	return photoOf(foundOne([row]), member.name, platform.photoAddresses);
}
