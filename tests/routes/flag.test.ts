import { readFileSync } from 'node:fs';
import { and, eq, isNull, ne, or } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Checkpoint } from '#shared/model/model-schema.ts';
import { checks } from '../../server/db/schema/check.ts';
import { flags } from '../../server/db/schema/flag.ts';
import { notices } from '../../server/db/schema/mail.ts';
import { auditEntries } from '../../server/db/schema/record.ts';
import { sites } from '../../server/db/schema/site.ts';
import { aSite } from '../builders/a-site.ts';
import { asBuilt, issuedSheet, plainSheet } from '../builders/as-built.ts';
import { checkpointsOfClass, copyModel } from '../builders/copied-model.ts';
import { followJob } from '../builders/follow-job.ts';
import { readModel } from '../builders/read-model.ts';
import { storeControl, storeSurvey } from '../builders/store-points.ts';
import { type Api, openTestServer, type TestServer } from './harness.ts';

let server: TestServer;
/** The revision that was read once; each site gets a part of it. */
let readOnce: string;
beforeAll(async () => {
	server = await openTestServer();
	const { engineer } = await aSite(server);
	readOnce = (await readModel(server, engineer, 'frame.ifc', file, { newName: 'Frame' })).revision.revisionId;
}, 180_000);
afterAll(() => server.close());

const file = readFileSync(new URL('../../fixtures/ifc/made-frame-mm-ifc4x3.ifc', import.meta.url));
const inDays = (days: number) => new Date(Date.now() + days * 86_400_000);

/** A site with a pour of all columns for each company but one element class, a model, and a checker. */
async function flaggable() {
	const site = await aSite(server);
	const { siteId, engineer, surveyor, companyId, otherCompanyId } = site;
	const { revisionId, modelId } = await copyModel(server, readOnce, siteId, { IfcColumn: 3, IfcWall: 2 });
	const checkpoints = await surveyor.api.model.checkpoints({ siteId, revisionId });
	const elements = await surveyor.api.model.elements({ siteId, revisionId });
	const kinds = (wanted: string) => {
		const storeys = new Set(elements.filter((one) => one.class === wanted).map(({ storey }) => storey));
		return [...storeys].map((storey) => ({ storey, class: wanted }));
	};
	const pour = (number: string, company: string, wanted: string) =>
		engineer.api.pour.add({
			siteId,
			pour: { number, name: wanted, companyId: company, plannedAt: null, modelId, elements: kinds(wanted) },
		});
	await pour('1', companyId, 'IfcColumn');
	await pour('2', otherCompanyId, 'IfcWall');
	const other = await server.addMember(siteId, ['contractor'], otherCompanyId);
	const ofClass = (wanted: string) => checkpointsOfClass(checkpoints, elements, wanted);
	let sheetId = await issuedSheet(server, engineer);
	const check = async (off: (checkpoint: Checkpoint) => number, surveyedOn = '2025-11-26', seen = checkpoints) => {
		const { control, survey } = asBuilt(seen, off);
		const { controlSetId } = await storeControl(server, surveyor, control);
		const said = { name: 'Survey', stage: 'as-cast' as const, surveyedOn, observer: 'V. O.', instrument: 'Total station', serial: '4711' };
		const { surveyId } = await storeSurvey(server, surveyor, survey, { survey: said });
		const { setups } = await surveyor.api.survey.get({ siteId, surveyId });
		const about = { siteId, setupId: setups[0]!.setupId, controlSetId, kind: 'levelled' as const, knownScale: null, shelves: [] };
		const { fitId } = await surveyor.api.fit.make(about);
		await surveyor.api.fit.adopt({ siteId, fitId, reason: 'Residuals are nil.' });
		return { ...(await rerun(surveyId)), surveyId, fitId, setupId: about.setupId, controlSetId };
	};
	const rerun = async (surveyId: string) => {
		const { checkId, jobId } = await surveyor.api.check.run({ siteId, revisionId, surveyId, sheetId });
		expect((await followJob(surveyor.api, siteId, jobId)).state).toBe('done');
		return { checkId };
	};
	const reissue = async (upperMm: number) => {
		sheetId = await issuedSheet(server, engineer, {
			...plainSheet,
			rules: [{ id: 'all', match: {}, lowerMm: -upperMm, upperMm, shape: 'disc' as const }],
		});
	};
	return { ...site, other, revisionId, modelId, checkpoints, ofClass, check, rerun, reissue };
}
type Flaggable = Awaited<ReturnType<typeof flaggable>>;

async function publish({ siteId, surveyor }: Flaggable, checkId: string, answerBy = inDays(3)) {
	const { planSha256 } = await surveyor.api.check.publishPlan({ siteId, checkId });
	return surveyor.api.check.publish({ siteId, checkId, answerBy, planSha256 });
}
const seenBy = async (api: Api, siteId: string) => (await api.flag.list({ siteId })).toSorted((a, b) => a.number - b.number);
const target = ({ flagId, version }: { flagId: string; version: number }) => ({ flagId, version });
const toldOf = async (userId: string) =>
	(
		await server.platform.db
			.select({ kind: notices.kind })
			.from(notices)
			.where(and(eq(notices.userId, userId), or(isNull(notices.end), ne(notices.end, 'taken-back'))))
	)
		.map(({ kind }) => kind)
		.sort();

describe('a check', { timeout: 180_000 }, () => {
	it('is a trial that contractors do not see, then published with the flags that were said, then withdrawn, told once', async () => {
		const site = await flaggable();
		const { siteId, surveyor, engineer, contractor, other, ofClass } = site;
		const face = ofClass('IfcColumn').find(({ characteristic }) => characteristic === 'face')!;
		const wall = ofClass('IfcWall').find(({ characteristic }) => characteristic === 'face')!;
		const { checkId } = await site.check(({ id }) => (id === face.id ? 34 : id === wall.id ? -41 : 0));
		expect(await contractor.api.check.list({ siteId })).toEqual([]);
		await expect(contractor.api.check.get({ siteId, checkId })).rejects.toMatchObject({ code: 'NOT_FOUND' });
		const plan = await surveyor.api.check.publishPlan({ siteId, checkId });
		expect(plan).toMatchObject({ toEngineers: 0, closes: 0, lapses: 0, refusal: null, uncheckedSetups: ['1'] });
		expect(plan.companies.map(({ name, flags: count }) => `${name} ${count}`).sort()).toEqual(['Formwork Ltd 1', 'Steel Ltd 1']);
		expect(plan.answerBy.getTime()).toBeGreaterThan(Date.now());
		const about = { siteId, checkId, answerBy: inDays(3), planSha256: plan.planSha256 };
		await expect(surveyor.api.check.publish({ ...about, answerBy: inDays(-1) })).rejects.toMatchObject({ data: { code: 'in-the-past' } });
		await expect(surveyor.api.check.publish({ ...about, planSha256: 'another' })).rejects.toMatchObject({ code: 'CONFLICT' });
		expect(await seenBy(engineer.api, siteId)).toEqual([]);
		// Two presses at once: one publishes.
		const outcomes = await Promise.allSettled([surveyor.api.check.publish(about), surveyor.api.check.publish(about)]);
		expect(outcomes.map(({ status }) => status).sort()).toEqual(['fulfilled', 'rejected']);
		expect((await seenBy(engineer.api, siteId)).map(({ state, verdict, isWith }) => [state, verdict, isWith])).toEqual([
			['open', 'outside', 'contractor'],
			['open', 'outside', 'contractor'],
		]);
		expect((await contractor.api.check.get({ siteId, checkId })).state).toBe('published');
		const [own] = await seenBy(contractor.api, siteId);
		expect(own).toMatchObject({ kind: 'face', companyName: 'Formwork Ltd', answerBy: about.answerBy, pours: [{ number: '1' }] });
		expect(Math.round(own!.worstMm)).toBe(34);
		expect(await seenBy(contractor.api, siteId)).toHaveLength(1);
		await expect(other.api.flag.get({ siteId, flagId: own!.flagId })).rejects.toMatchObject({ code: 'NOT_FOUND' });
		const published = ['check-published'];
		expect([await toldOf(contractor.userId), await toldOf(other.userId), await toldOf(site.owner.userId)]).toEqual([
			published,
			published,
			[],
		]);

		// Taken back by who published it, and by nobody else: a trial again without a flag or a notice; then published once more.
		await expect(engineer.api.check.takeBack({ siteId, checkId })).rejects.toMatchObject({ code: 'FORBIDDEN' });
		await expect(site.secondSurveyor.api.check.takeBack({ siteId, checkId })).rejects.toMatchObject({
			data: { code: 'not-yours-to-take-back' },
		});
		expect((await surveyor.api.check.get({ siteId, checkId })).takeBackUntil).toBeInstanceOf(Date);
		await surveyor.api.check.takeBack({ siteId, checkId });
		expect((await surveyor.api.check.get({ siteId, checkId })).state).toBe('trial');
		expect(await seenBy(engineer.api, siteId)).toEqual([]);
		expect(await toldOf(contractor.userId)).toEqual([]);
		expect(await surveyor.api.check.publishPlan({ siteId, checkId })).toMatchObject({ planSha256: plan.planSha256 });
		await surveyor.api.check.publish(about);
		expect(await toldOf(contractor.userId)).toEqual(published);
		const [answered] = await seenBy(contractor.api, siteId);
		const answer = { kind: 'put-right' as const, means: 'rework' as const, how: 'Grind.', by: inDays(2) };
		await contractor.api.flag.answer({ siteId, flags: [target(answered!)], answer });
		await expect(surveyor.api.check.takeBack({ siteId, checkId })).rejects.toMatchObject({ data: { code: 'flag-acted-on' } });
		expect((await surveyor.api.check.get({ siteId, checkId })).state).toBe('published');
		await server.platform.db
			.update(checks)
			.set({ publishedAt: new Date(Date.now() - 180_000) })
			.where(eq(checks.id, checkId));
		await expect(surveyor.api.check.takeBack({ siteId, checkId })).rejects.toMatchObject({ data: { code: 'too-late' } });

		await expect(engineer.api.check.withdraw({ siteId, checkId, reason: 'x' })).rejects.toMatchObject({ code: 'FORBIDDEN' });
		expect(await surveyor.api.check.withdraw({ siteId, checkId, reason: 'Wrong prism.' })).toEqual({ lapsed: 2 });
		expect((await seenBy(engineer.api, siteId)).map(({ state, lapsedWords }) => [state, lapsedWords])).toEqual(
			Array.from({ length: 2 }, () => ['lapsed', 'Check 1 was withdrawn: Wrong prism.']),
		);
		const withdrawn = ['check-withdrawn'];
		expect([await toldOf(contractor.userId), await toldOf(engineer.userId)]).toEqual([
			[...published, ...withdrawn],
			[...withdrawn, 'flag-answered'],
		]);
		await expect(surveyor.api.check.withdraw({ siteId, checkId, reason: 'Again.' })).rejects.toMatchObject({ code: 'CONFLICT' });
		expect(await toldOf(contractor.userId)).toHaveLength(2);
		const kinds = await server.platform.db
			.select({ kind: auditEntries.kind })
			.from(auditEntries)
			.where(eq(auditEntries.subjectId, checkId));
		expect(kinds.map(({ kind }) => kind).sort()).toEqual([
			'check-computed',
			'check-published',
			'check-published',
			'check-run',
			'check-taken-back',
			'check-withdrawn',
		]);
	});

	it('on a fit that is adopted no more, or by a superseded sheet, is not published, and nothing is stored', async () => {
		const site = await flaggable();
		const { siteId, surveyor } = site;
		const first = await site.check(() => 0);
		const about = {
			siteId,
			setupId: first.setupId,
			controlSetId: first.controlSetId,
			kind: 'levelled' as const,
			knownScale: null,
			shelves: [],
		};
		const { fitId } = await surveyor.api.fit.make(about);
		await surveyor.api.fit.adopt({ siteId, fitId, reason: 'Another.' });
		expect((await surveyor.api.check.publishPlan({ siteId, checkId: first.checkId })).refusal).toMatch(/adopted no more/);
		await expect(publish(site, first.checkId)).rejects.toMatchObject({ code: 'REFUSED', data: { code: 'fit-not-adopted' } });
		const { checkId } = await site.rerun(first.surveyId);
		await site.reissue(30);
		await expect(publish(site, checkId)).rejects.toMatchObject({ data: { code: 'sheet-not-issued' } });
		expect((await surveyor.api.check.get({ siteId, checkId })).state).toBe('trial');
	});

	it('of an old survey by wider limits lets its flags lapse, saying so; what rested on a withdrawn one stands on what is left', async () => {
		const site = await flaggable();
		const { siteId, engineer, surveyor, ofClass } = site;
		const face = ofClass('IfcColumn').find(({ characteristic }) => characteristic === 'face')!;
		const first = await site.check(({ id }) => (id === face.id ? 34 : 0), '2025-11-20');
		await publish(site, first.checkId);
		const better = await site.check(() => 0, '2025-11-24');
		await publish(site, better.checkId);
		expect(await seenBy(engineer.api, siteId)).toMatchObject([{ state: 'closed', closedOn: 'check-within' }]);
		await surveyor.api.check.withdraw({ siteId, checkId: better.checkId, reason: 'Wrong day.' });
		expect(await seenBy(engineer.api, siteId)).toMatchObject([{ state: 'open', round: 2, checkId: first.checkId }]);
		await site.reissue(50);
		const { checkId } = await site.rerun(first.surveyId);
		await publish(site, checkId);
		expect(await seenBy(engineer.api, siteId)).toMatchObject([{ state: 'lapsed', lapsedBecause: 'limits-changed' }]);
	});
});

describe('a flag', { timeout: 180_000 }, () => {
	it('is answered, decided, put right, measured within and closed, each by whom it is for', async () => {
		const site = await flaggable();
		const { siteId, engineer, contractor, surveyor, owner, observer, other, ofClass } = site;
		const face = ofClass('IfcColumn').find(({ characteristic }) => characteristic === 'face')!;
		const first = await site.check(({ id }) => (id === face.id ? 34 : 0), '2025-11-20');
		await publish(site, first.checkId);
		const [flag] = await seenBy(contractor.api, siteId);
		const flagsInput = { siteId, flags: [target(flag!)] };
		const answer = { kind: 'put-right' as const, means: 'rework' as const, how: 'Grind.', by: inDays(2) };
		const decision = { kind: 'rework' as const, reason: 'The stair will not fit.', by: null };

		const refusals = await Promise.allSettled([
			engineer.api.flag.answer({ ...flagsInput, answer }),
			other.api.flag.answer({ ...flagsInput, answer }),
			observer.api.flag.answer({ ...flagsInput, answer }),
			contractor.api.flag.decide({ ...flagsInput, decision }),
			owner.api.flag.decide({ ...flagsInput, decision }),
			surveyor.api.flag.decide({ ...flagsInput, decision }),
			engineer.api.flag.decide({ ...flagsInput, decision }),
			contractor.api.flag.putRight(flagsInput),
			observer.api.flag.comment({ siteId, flagId: flag!.flagId, text: 'Hm.' }),
			contractor.api.flag.grantTime(flagsInput),
		]);
		expect(refusals.map((one) => (one.status === 'rejected' ? one.reason.code : 'let in'))).toEqual([
			'FORBIDDEN',
			'NOT_FOUND',
			'FORBIDDEN',
			'FORBIDDEN',
			'FORBIDDEN',
			'FORBIDDEN',
			'REFUSED',
			'REFUSED',
			'FORBIDDEN',
			'FORBIDDEN',
		]);
		expect((await seenBy(engineer.api, siteId))[0]).toEqual(expect.objectContaining({ state: 'open', version: 1 }));

		await contractor.api.flag.askTime({ ...flagsInput, until: inDays(9) });
		await engineer.api.flag.grantTime({ siteId, flags: [{ flagId: flag!.flagId, version: 2 }] });
		expect((await seenBy(contractor.api, siteId))[0]!.answerBy!.getTime()).toBeGreaterThan(inDays(8).getTime());
		await contractor.api.flag.answer({
			siteId,
			flags: [{ flagId: flag!.flagId, version: 3 }],
			answer: { kind: 'concession', why: 'No harm.' },
		});
		// Two answers at once: one stands, the other is told.
		const both = await Promise.allSettled(
			['Grind.', 'Chisel.'].map((how) =>
				contractor.api.flag.answer({ siteId, flags: [{ flagId: flag!.flagId, version: 4 }], answer: { ...answer, how } }),
			),
		);
		expect(both.map(({ status }) => status).sort()).toEqual(['fulfilled', 'rejected']);
		expect(both.find((one) => one.status === 'rejected')).toMatchObject({
			reason: { code: 'CONFLICT', message: expect.stringContaining('Flag 1') },
		});
		const decided = await Promise.allSettled(
			['rework', 'repair'].map((kind) =>
				engineer.api.flag.decide({
					siteId,
					flags: [{ flagId: flag!.flagId, version: 5 }],
					decision: { ...decision, kind: kind as 'rework' },
				}),
			),
		);
		expect(decided.map(({ status }) => status).sort()).toEqual(['fulfilled', 'rejected']);
		await contractor.api.flag.putRight({ siteId, flags: [{ flagId: flag!.flagId, version: 6 }] });
		await server.platform.db
			.update(flags)
			.set({ putRightAt: new Date('2025-11-22T12:00:00Z') })
			.where(eq(flags.id, flag!.flagId));
		await owner.api.flag.comment({ siteId, flagId: flag!.flagId, text: 'Seen.' });

		const list = await surveyor.api.flag.shootList({ siteId });
		expect(list.filter(({ why }) => why === 'put-right').map(({ globalId }) => globalId)).toContain(flag!.globalId);
		const csv = await (await surveyor.api.flag.shootCsv({ siteId, fitId: first.fitId })).text();
		const { survey } = asBuilt(site.checkpoints, () => 0);
		const shot = list.find(({ checkpointId }) => checkpointId === face.id)!;
		const asShot = survey
			.split('\n')
			.find((line) => line.startsWith(`${face.id},`))!
			.split(',');
		const row = csv.split('\n')[1 + list.indexOf(shot)]!.split(',');
		for (const axis of [1, 2, 3]) expect(Number(row[axis])).toBeCloseTo(Number(asShot[axis]), 3);

		// The same survey published again says nothing of what was put right since.
		const again = await site.check(() => 0, '2025-11-25', [face, ...site.checkpoints.slice(0, 5)]);
		await publish(site, again.checkId);
		const detail = await contractor.api.flag.get({ siteId, flagId: flag!.flagId });
		expect(detail).toMatchObject({ state: 'closed', closedOn: 'check-within', checkId: again.checkId, projectEngineers: [engineer.name] });
		expect(detail.history.map(({ words }) => words.split(':')[0])).toEqual(
			expect.arrayContaining(['Raised', 'Asks for a concession', 'Will put it right', 'Put right, ready to measure', 'Says']),
		);
		const point = detail.points.find(({ deviation }) => deviation.checkpointId === face.id)!;
		expect(point.trend.map(({ deviationMm }) => Math.round(deviationMm) + 0)).toEqual([34, 0]);
		expect(point.disagreement).toBeNull();
		const kinds = await server.platform.db
			.select({ kind: auditEntries.kind })
			.from(auditEntries)
			.where(eq(auditEntries.subjectId, flag!.flagId));
		expect(new Set(kinds.map(({ kind }) => kind))).toEqual(
			new Set([
				'flag-raised',
				'flag-time-asked',
				'flag-time-granted',
				'flag-answered',
				'flag-decided',
				'flag-put-right',
				'flag-commented',
				'flag-measured-again',
			]),
		);
	});

	it('is conceded over several at once, with the owner’s consent where the site asks it', async () => {
		const site = await flaggable();
		const { siteId, engineer, contractor, owner, ofClass } = site;
		await server.platform.db.update(sites).set({ needsOwnersConsent: true }).where(eq(sites.id, siteId));
		const faces = ofClass('IfcColumn').filter(({ characteristic }) => characteristic === 'face');
		const { checkId } = await site.check(({ id }) => (faces.some((one) => one.id === id) ? 34 : 0));
		await publish(site, checkId);
		const raised = await seenBy(contractor.api, siteId);
		expect(raised.length).toBeGreaterThan(1);
		await contractor.api.flag.answer({ siteId, flags: raised.map(target), answer: { kind: 'concession', why: 'No harm.' } });
		const limits = { upToMm: 20, extent: 'These columns', number: null, until: null, use: null };
		const decision = { kind: 'concession' as const, reason: 'Cladding has play.', conditions: null, limits };
		const answered = (await seenBy(engineer.api, siteId)).map(target);
		await expect(engineer.api.flag.decide({ siteId, flags: answered, decision })).rejects.toMatchObject({
			data: { code: 'below-measured' },
		});
		await engineer.api.flag.decide({ siteId, flags: answered, decision: { ...decision, limits: { ...limits, upToMm: 40 } } });
		const waiting = await seenBy(owner.api, siteId);
		expect(waiting.every(({ state, isConsentAwaited }) => state === 'decided' && isConsentAwaited)).toBe(true);
		await expect(engineer.api.flag.consent({ siteId, flags: waiting.map(target), isGiven: true, reason: 'Yes.' })).rejects.toMatchObject({
			code: 'FORBIDDEN',
		});
		await owner.api.flag.consent({ siteId, flags: waiting.map(target), isGiven: true, reason: 'No harm to the cladding.' });
		expect((await seenBy(owner.api, siteId)).every(({ closedOn }) => closedOn === 'concession')).toBe(true);
		// All or none: one of another company among them.
		await expect(site.other.api.flag.putRight({ siteId, flags: waiting.map(target) })).rejects.toMatchObject({ code: 'NOT_FOUND' });
	});
});
