import { z } from 'zod';

export const modelJobs = {
	readIfc: {
		name: 'model.read-ifc',
		input: z.object({
			jobId: z.uuid(),
			siteId: z.uuid(),
			revisionId: z.uuid(),
		}),
	},
};
