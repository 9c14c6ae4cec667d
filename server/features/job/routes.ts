import { mayWith } from '#shared/permissions.ts';
import { siteRoutes } from '../../platform/guard.ts';
import { memberOf } from '../../platform/membership.ts';
import { cancelJob } from './cancel-job.ts';
import { followJob } from './follow-job.ts';
import { progressOf } from './queries.ts';

export const jobRoutes = {
	get: siteRoutes.job.get.handler(({ input, context: { platform, member } }) => progressOf(platform.db, member.siteId, input.jobId)),
	follow: siteRoutes.job.follow.handler(async ({ input, context: { platform, member }, signal }) => {
		// Asked once before the answer begins: a job that is not there is a 404, not a stream that breaks.
		await progressOf(platform.db, member.siteId, input.jobId);
		const maySee = async () => {
			const still = await memberOf(platform.db, member, member.siteId, platform.now());
			return still !== null && mayWith(still.roles, 'job.see');
		};
		return followJob(platform.db, member.siteId, input.jobId, signal, maySee);
	}),
	cancel: siteRoutes.job.cancel.handler(({ input, context: { platform, member } }) => cancelJob(platform, member, input.jobId)),
};
