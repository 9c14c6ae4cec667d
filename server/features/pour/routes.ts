import { whyNotSigner } from '#shared/pour/pour-life.ts';
import { siteRoutes } from '../../platform/guard.ts';
import { addPour } from './add-pour.ts';
import { poursBoard } from './board.ts';
import { changeElements, giveElements } from './change-elements.ts';
import { beginConcreting, endConcreting, giveNotice, meetCondition, sayWitness, seeHold } from './concrete.ts';
import { askMore, callPoint, setList, submitPoint } from './hold-point-acts.ts';
import { holdTouched, touchesOf } from './hold-touched.ts';
import { loadOwnLife } from './load-pour.ts';
import { loadShown, shownText } from './load-shown.ts';
import { pourDetailOf, poursOf } from './queries.ts';
import { hashOf, signDecision, withdrawRelease } from './sign-pour.ts';

export const pourRoutes = {
	list: siteRoutes.pour.list.handler(async ({ context: { platform, member } }) => {
		await holdTouched(platform, member.siteId);
		return poursOf(platform.db, member);
	}),
	board: siteRoutes.pour.board.handler(async ({ context: { platform, member } }) => {
		await holdTouched(platform, member.siteId);
		return poursBoard(platform, member);
	}),
	add: siteRoutes.pour.add.handler(({ input, context: { platform, member } }) => addPour(platform, member, input.pour)),
	changeElements: siteRoutes.pour.changeElements.handler(async ({ input, context: { platform, member } }) => {
		await changeElements(platform, member, input);
		return pourDetailOf(platform.db, member, input.pourId);
	}),
	giveElements: siteRoutes.pour.giveElements.handler(async ({ input, context: { platform, member } }) => {
		await giveElements(platform, member, input);
		return pourDetailOf(platform.db, member, input.pourId);
	}),
	get: siteRoutes.pour.get.handler(async ({ input, context: { platform, member } }) => {
		await holdTouched(platform, member.siteId);
		return pourDetailOf(platform.db, member, input.pourId);
	}),
	shown: siteRoutes.pour.shown.handler(async ({ input: { pourId, point }, context: { platform, member } }) => {
		const { points } = await loadOwnLife(platform.db, member, pourId);
		const { shown, readiness, preparedBy } = await loadShown(platform.db, member.siteId, pourId, point);
		return {
			shown,
			shownSha256: hashOf(shownText(shown)),
			readiness: readiness.sentences.map(({ text, isGood }) => ({ text, isGood })),
			touches: await touchesOf(platform.db, member.siteId, { recordId: points[point].recordId, present: shown }),
			whyNotSign: member.roles.includes('owners-representative') ? whyNotSigner(member.userId, preparedBy) : null,
		};
	}),
	setList: siteRoutes.pour.setList.handler(async ({ input, context: { platform, member } }) => {
		await setList(platform, member, input);
		return pourDetailOf(platform.db, member, input.pourId);
	}),
	call: siteRoutes.pour.call.handler(async ({ input, context: { platform, member } }) => {
		await callPoint(platform, member, input);
		return pourDetailOf(platform.db, member, input.pourId);
	}),
	submit: siteRoutes.pour.submit.handler(async ({ input, context: { platform, member } }) => {
		await submitPoint(platform, member, input);
		return pourDetailOf(platform.db, member, input.pourId);
	}),
	release: siteRoutes.pour.release.handler(({ input, context: { platform, member } }) =>
		signDecision(platform, member, { ...input, act: 'release' }),
	),
	askMore: siteRoutes.pour.askMore.handler(async ({ input, context: { platform, member } }) => {
		await askMore(platform, member, input);
		return pourDetailOf(platform.db, member, input.pourId);
	}),
	refuse: siteRoutes.pour.refuse.handler(({ input, context: { platform, member } }) =>
		signDecision(platform, member, { ...input, act: 'refuse' }),
	),
	withdraw: siteRoutes.pour.withdraw.handler(({ input, context: { platform, member } }) => withdrawRelease(platform, member, input)),
	beginConcreting: siteRoutes.pour.beginConcreting.handler(async ({ input, context: { platform, member } }) => {
		await beginConcreting(platform, member, input);
		return pourDetailOf(platform.db, member, input.pourId);
	}),
	endConcreting: siteRoutes.pour.endConcreting.handler(async ({ input, context: { platform, member } }) => {
		const restPourId = await endConcreting(platform, member, input);
		return { pour: await pourDetailOf(platform.db, member, input.pourId), restPourId };
	}),
	seeHold: siteRoutes.pour.seeHold.handler(async ({ input, context: { platform, member } }) => {
		await seeHold(platform, member, input.pourId);
		return pourDetailOf(platform.db, member, input.pourId);
	}),
	giveNotice: siteRoutes.pour.giveNotice.handler(async ({ input, context: { platform, member } }) => {
		await giveNotice(platform, member, input);
		return pourDetailOf(platform.db, member, input.pourId);
	}),
	sayWitness: siteRoutes.pour.sayWitness.handler(async ({ input, context: { platform, member } }) => {
		await sayWitness(platform, member, input);
		return pourDetailOf(platform.db, member, input.pourId);
	}),
	meetCondition: siteRoutes.pour.meetCondition.handler(async ({ input, context: { platform, member } }) => {
		await meetCondition(platform, member, input);
		return pourDetailOf(platform.db, member, input.pourId);
	}),
};
