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
	previewPlacing: {
		name: 'model.preview-placing',
		input: z.object({
			jobId: z.uuid(),
			siteId: z.uuid(),
			previewId: z.uuid(),
		}),
	},
};
