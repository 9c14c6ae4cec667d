import { siteRoutes } from '../../platform/guard.ts';
import { runInThread } from '../../platform/run-in-thread.ts';
import { requireSecondFactor } from '../../platform/second-factor.ts';
import { adoptFit } from './adopt-fit.ts';
import { confirmFit } from './confirm-fit.ts';
import { type FitReportData, fitReportData } from './fit-report-data.ts';
import { makeFit } from './make-fit.ts';
import { fitTies, makeTogether } from './make-together.ts';
import { fitOf, fitsOf } from './queries.ts';
import { setupPairs } from './setup-pairs.ts';

export const fitRoutes = {
	pairs: siteRoutes.fit.pairs.handler(async ({ input, context: { platform } }) => (await setupPairs(platform.db, input)).pairs),
	list: siteRoutes.fit.list.handler(({ input, context: { platform, member } }) => fitsOf(platform.db, member.siteId, input.setupId)),
	get: siteRoutes.fit.get.handler(({ input, context: { platform, member } }) => fitOf(platform.db, member.siteId, input.fitId)),
	make: siteRoutes.fit.make.handler(async ({ input, context: { platform, member }, errors }) => {
		const made = await makeFit(platform, member, input);
		if (!made.ok) throw errors.NO_FIT({ message: made.refusal.message, data: made.refusal });
		return made.fit;
	}),
	ties: siteRoutes.fit.ties.handler(({ input, context: { platform } }) => fitTies(platform.db, input)),
	makeTogether: siteRoutes.fit.makeTogether.handler(async ({ input, context: { platform, member }, errors }) => {
		const made = await makeTogether(platform, member, input);
		if (!made.ok) throw errors.NO_FIT({ message: made.refusal.message, data: made.refusal });
		return made.together;
	}),
	adopt: siteRoutes.fit.adopt.handler(async ({ input, context: { platform, member }, errors }) => {
		await requireSecondFactor(platform.db, member);
		const adopted = await adoptFit(platform, member, input);
		if (adopted === 'stale') throw errors.STALE();
		return adopted;
	}),
	report: siteRoutes.fit.report.handler(async ({ input, context: { platform, member } }) => {
		const data = await fitReportData(platform.db, member.siteId, input.fitId, platform.now());
		const worker = { file: './fit-report.worker.ts', from: import.meta.url };
		const bytes = await runInThread<FitReportData, Uint8Array>(worker, data);
		return new File([bytes as Uint8Array<ArrayBuffer>], `fit-${data.fit.number}.pdf`, { type: 'application/pdf' });
	}),
	confirm: siteRoutes.fit.confirm.handler(async ({ input, context: { platform, member } }) => {
		await requireSecondFactor(platform.db, member);
		return confirmFit(platform, member, input);
	}),
};
