import { copyFile, mkdir, stat } from 'node:fs/promises';
import { join } from 'node:path';
import { setTimeout as wait } from 'node:timers/promises';
import type { RouterClient } from '@orpc/server';
import { createRouterClient } from '@orpc/server';
import { eq } from 'drizzle-orm';
import { router } from '../../app/router.ts';
import { uploads } from '../../db/schema/file.ts';
import { jobs } from '../../db/schema/job.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { countTries } from '../../platform/tries.ts';
import { uploadPath } from '../../platform/uploads.ts';

/** How the demo acts: through the same routes as people, with their permissions, on days gone by. */

const demoFolder = 'fixtures/demo';
export const dayMs = 24 * 3_600_000;

export type DemoClient = RouterClient<typeof router>;

/** The routes as this person would call them at this time, freshly signed in with a second factor. */
export function actingAs(platform: Platform, member: Member, at: Date): DemoClient {
	const then: Platform = { ...platform, now: () => at };
	return createRouterClient(router, {
		context: {
			platform: then,
			signedIn: { ...member, proof: { freshUntil: new Date(at.getTime() + 600_000), hasSecondFactor: true } },
			session: { start: async () => {}, end: async () => {}, id: null },
			address: '',
			tries: countTries(then.now),
		},
	});
}

/** A file of the demo as if this member had just sent it. */
export async function asUpload(platform: Platform, member: Member, fileName: string, at: Date): Promise<string> {
	const source = join(demoFolder, fileName);
	const uploadId = platform.newId().replaceAll('-', '');
	await mkdir(platform.uploadFolder, { recursive: true });
	await copyFile(source, uploadPath(platform.uploadFolder, uploadId));
	const { size } = await stat(source);
	await platform.db
		.insert(uploads)
		.values({ id: uploadId, siteId: member.siteId, userId: member.userId, fileName, bytes: size, begunAt: at, finishedAt: at });
	return uploadId;
}

/** Waits for long work to end well. */
export async function ended(platform: Platform, jobId: string): Promise<void> {
	for (let tries = 0; tries < 600; tries++) {
		const [job] = await platform.db.select().from(jobs).where(eq(jobs.id, jobId));
		if (job?.state === 'done') return;
		if (job?.state === 'failed' || job?.state === 'cancelled') throw new Error(`The demo's ${job.kind} ended: ${job.reason}`);
		await wait(100);
	}
	throw new Error('The demo was not made within a minute.');
}
