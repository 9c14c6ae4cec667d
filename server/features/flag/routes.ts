import { siteRoutes } from '../../platform/guard.ts';
import { actOnFlags } from './act-on-flags.ts';
import { addComment } from './add-comment.ts';
import { bringPoints, broughtFileOf, storePoints } from './brought-points.ts';
import { addPhoto } from './photos.ts';
import { flagDetailOf, flagRowOf, flagsOf } from './queries.ts';
import { shootCsvOf, shootListOf } from './shoot-list.ts';
import { takeBackAct } from './take-back.ts';

export const flagRoutes = {
	list: siteRoutes.flag.list.handler(({ context: { platform, member } }) => flagsOf(platform.db, member)),
	get: siteRoutes.flag.get.handler(({ input, context: { platform, member } }) => flagDetailOf(platform, member, input.flagId)),
	answer: siteRoutes.flag.answer.handler(({ input: { flags, answer, actId }, context: { platform, member } }) =>
		actOnFlags(platform, member, flags, { kind: 'answer', answer }, { actId }),
	),
	askTime: siteRoutes.flag.askTime.handler(({ input: { flags, until, actId }, context: { platform, member } }) =>
		actOnFlags(platform, member, flags, { kind: 'ask-time', until: until.getTime() }, { actId }),
	),
	putRight: siteRoutes.flag.putRight.handler(({ input: { flags, actId }, context: { platform, member } }) =>
		actOnFlags(platform, member, flags, { kind: 'put-right' }, { actId }),
	),
	decide: siteRoutes.flag.decide.handler(({ input: { flags, decision, actId }, context: { platform, member } }) =>
		actOnFlags(platform, member, flags, { kind: 'decide', decision }, { actId }),
	),
	grantTime: siteRoutes.flag.grantTime.handler(({ input: { flags, actId }, context: { platform, member } }) =>
		actOnFlags(platform, member, flags, { kind: 'grant-time' }, { actId }),
	),
	consent: siteRoutes.flag.consent.handler(({ input: { flags, isGiven, reason, actId }, context: { platform, member } }) =>
		actOnFlags(platform, member, flags, { kind: 'consent', isGiven }, { actId, consentReason: reason }),
	),
	takeBack: siteRoutes.flag.takeBack.handler(({ input: { actId }, context: { platform, member } }) => takeBackAct(platform, member, actId)),
	bringPoints: siteRoutes.flag.bringPoints.handler(async ({ input: { flagId, uploadId }, context: { platform, member } }) => {
		const { row } = await flagRowOf(platform.db, member, flagId);
		return bringPoints(platform, member, row, uploadId);
	}),
	storePoints: siteRoutes.flag.storePoints.handler(({ input: { broughtId, surveyId }, context: { platform, member } }) =>
		storePoints(platform, member, broughtId, surveyId),
	),
	broughtFile: siteRoutes.flag.broughtFile.handler(({ input: { broughtId }, context: { platform, member } }) =>
		broughtFileOf(platform, member, broughtId),
	),
	comment: siteRoutes.flag.comment.handler(async ({ input: { flagId, text }, context: { platform, member } }) => {
		const { row } = await flagRowOf(platform.db, member, flagId);
		return addComment(platform, member, row, text);
	}),
	addPhoto: siteRoutes.flag.addPhoto.handler(async ({ input: { flagId, uploadId }, context: { platform, member } }) => {
		const { row } = await flagRowOf(platform.db, member, flagId);
		return addPhoto(platform, member, row, uploadId);
	}),
	shootList: siteRoutes.flag.shootList.handler(({ context: { platform, member } }) => shootListOf(platform.db, member)),
	shootCsv: siteRoutes.flag.shootCsv.handler(({ input, context: { platform, member } }) => shootCsvOf(platform.db, member, input.fitId)),
};
