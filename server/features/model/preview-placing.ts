import { and, eq } from 'drizzle-orm';
import type { PlacingPreview } from '#shared/model/choices-contract.ts';
import { modelJobs } from '#shared/model/jobs.ts';
import type { CheckpointDensity } from '#shared/site/site-settings.ts';
import type { Handle } from '../../db/database.ts';
import { placingPreviews } from '../../db/schema/model.ts';
import { audit } from '../../platform/audit.ts';
import { startJob } from '../../platform/job-row.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { foundOne } from '../../platform/refuse.ts';

/** Begins to count what another density would place on each model's newest revision. */
export async function previewPlacing(
	platform: Platform,
	member: Member,
	{ placing }: { placing: CheckpointDensity },
): Promise<{ previewId: string; jobId: string }> {
	const { siteId } = member;
	const [previewId, jobId] = [platform.newId(), platform.newId()];
	await platform.transaction(async (tx) => {
		await tx.delete(placingPreviews).where(and(eq(placingPreviews.siteId, siteId), eq(placingPreviews.askedBy, member.userId)));
		await tx.insert(placingPreviews).values({ id: previewId, siteId, askedBy: member.userId, askedAt: platform.now(), placing });
		await startJob(platform, tx, member, modelJobs.previewPlacing, { jobId, siteId, previewId }, { subjectId: previewId });
		await audit(tx, member, { kind: 'placing-previewed', subjectId: previewId, data: { placing } });
	});
	return { previewId, jobId };
}

/** What was counted; NOT_FOUND once another was asked for. */
export async function placingPreviewOf(db: Handle, siteId: string, previewId: string): Promise<PlacingPreview> {
	const { placing, counted } = foundOne(
		await db
			.select()
			.from(placingPreviews)
			.where(and(eq(placingPreviews.siteId, siteId), eq(placingPreviews.id, previewId))),
	);
	return { placing, models: counted };
}
