import { z } from 'zod';

export const checkJobs = {
	computeCheck: {
		name: 'check.compute',
		input: z.object({ jobId: z.uuid(), siteId: z.uuid(), checkId: z.uuid() }),
	},
};
