import { siteRoutes } from '../../platform/guard.ts';
import { actOnFlags } from './act-on-flags.ts';
import { addComment } from './add-comment.ts';
import { addPhoto } from './photos.ts';
import { flagDetailOf, flagRowOf, flagsOf } from './queries.ts';
import { shootCsvOf, shootListOf } from './shoot-list.ts';

export const flagRoutes = {
	list: siteRoutes.flag.list.handler(({ context: { platform, member } }) => flagsOf(platform.db, member)),
	get: siteRoutes.flag.get.handler(({ input, context: { platform, member } }) => flagDetailOf(platform, member, input.flagId)),
	answer: siteRoutes.flag.answer.handler(({ input: { flags, answer }, context: { platform, member } }) =>
		actOnFlags(platform, member, flags, { kind: 'answer', answer }),
	),
	askTime: siteRoutes.flag.askTime.handler(({ input: { flags, until }, context: { platform, member } }) =>
		actOnFlags(platform, member, flags, { kind: 'ask-time', until: until.getTime() }),
	),
	putRight: siteRoutes.flag.putRight.handler(({ input: { flags }, context: { platform, member } }) =>
		actOnFlags(platform, member, flags, { kind: 'put-right' }),
	),
	decide: siteRoutes.flag.decide.handler(({ input: { flags, decision }, context: { platform, member } }) =>
		actOnFlags(platform, member, flags, { kind: 'decide', decision }),
	),
	grantTime: siteRoutes.flag.grantTime.handler(({ input: { flags }, context: { platform, member } }) =>
		actOnFlags(platform, member, flags, { kind: 'grant-time' }),
	),
	consent: siteRoutes.flag.consent.handler(({ input: { flags, isGiven, reason }, context: { platform, member } }) =>
		actOnFlags(platform, member, flags, { kind: 'consent', isGiven }, reason),
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
