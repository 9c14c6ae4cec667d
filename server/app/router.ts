import type { Router } from '@orpc/server';
import type { contract } from '#shared/contract.ts';
import { accountRoutes } from '../features/account/routes.ts';
import { checkRoutes } from '../features/check/routes.ts';
import { controlRoutes } from '../features/control/routes.ts';
import { fitRoutes } from '../features/fit/routes.ts';
import { flagRoutes } from '../features/flag/routes.ts';
import { jobRoutes } from '../features/job/routes.ts';
import { mailRoutes } from '../features/mail/routes.ts';
import { modelRoutes } from '../features/model/routes.ts';
import { pourRoutes } from '../features/pour/routes.ts';
import { recordRoutes } from '../features/record/routes.ts';
import { siteRoutes } from '../features/site/routes.ts';
import { surveyRoutes } from '../features/survey/routes.ts';
import { toleranceRoutes } from '../features/tolerance/routes.ts';
import type { RequestContext } from '../platform/guard.ts';
import { acceptInvitationRoute } from '../workflows/accept-invitation.ts';
import { boardRoute } from '../workflows/board.ts';
import { foundSiteRoute } from '../workflows/found-site.ts';
import { issueSheetRoute } from '../workflows/issue-sheet.ts';
import { publishCheckRoute, publishPlanRoute } from '../workflows/publish-check.ts';
import { storeControlRoute } from '../workflows/store-control.ts';
import { storeSurveyRoute } from '../workflows/store-survey.ts';
import { takeBackCheckRoute } from '../workflows/take-back-check.ts';
import { withdrawCheckRoute } from '../workflows/withdraw-check.ts';

/** All routes of the contract: one that is missing does not compile. */
export const router = {
	account: accountRoutes,
	site: { ...siteRoutes, found: foundSiteRoute, acceptInvitation: acceptInvitationRoute, board: boardRoute },
	mail: mailRoutes,
	job: jobRoutes,
	model: modelRoutes,
	control: { ...controlRoutes, store: storeControlRoute },
	survey: { ...surveyRoutes, store: storeSurveyRoute },
	fit: fitRoutes,
	tolerance: { ...toleranceRoutes, issue: issueSheetRoute },
	check: {
		...checkRoutes,
		publishPlan: publishPlanRoute,
		publish: publishCheckRoute,
		takeBack: takeBackCheckRoute,
		withdraw: withdrawCheckRoute,
	},
	flag: flagRoutes,
	pour: pourRoutes,
	record: recordRoutes,
} satisfies Router<typeof contract, RequestContext>;
