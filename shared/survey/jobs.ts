import { z } from 'zod';

export const surveyJobs = {
	storePoints: {
		name: 'survey.store-points',
		input: z.object({ jobId: z.uuid(), siteId: z.uuid(), surveyId: z.uuid() }),
	},
};
