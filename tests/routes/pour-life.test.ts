import { readFileSync } from 'node:fs';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { readPublicKeys } from '#shared/record/public-key.ts';
import { readRecordFile } from '#shared/record/read-record-file.ts';
import { verifyRecords } from '#shared/record/verify-records.ts';
import { sessions } from '../../server/db/schema/account.ts';
import { checks } from '../../server/db/schema/check.ts';
import { fits } from '../../server/db/schema/fit.ts';
import { holdPoints, pourHolds, pours } from '../../server/db/schema/pour.ts';
import { auditEntries, sealedRecords } from '../../server/db/schema/record.ts';
import { aSite } from '../builders/a-site.ts';
import { asBuilt, issuedSheet, plainSheet } from '../builders/as-built.ts';
import { followJob } from '../builders/follow-job.ts';
import { readModel } from '../builders/read-model.ts';
import { storeControl, storeSurvey } from '../builders/store-points.ts';
import { openTestServer, type TestServer } from './harness.ts';

let server: TestServer;
let site: Awaited<ReturnType<typeof aMeasuredSite>>;
beforeAll(async () => {
	server = await openTestServer();
	site = await aMeasuredSite();
}, 180_000);
afterAll(() => server.close());

const point = 'before-pour' as const;

/** A site whose columns are measured before the pour, all within, the check published. */
async function aMeasuredSite() {
	const site = await aSite(server);
	const { siteId, engineer, surveyor, secondSurveyor, owner } = site;
	const file = readFileSync(new URL('../../fixtures/ifc/made-frame-mm-ifc4x3.ifc', import.meta.url));
	const { revision } = await readModel(server, engineer, 'frame.ifc', file, { newName: 'Frame' });
	const { revisionId, modelId } = revision;
	const checkpoints = await surveyor.api.model.checkpoints({ siteId, revisionId });
	const sheetId = await issuedSheet(server, engineer);
	const { control, survey } = asBuilt(checkpoints, () => 0);
	const { controlSetId } = await storeControl(server, surveyor, control);
	const { surveyId } = await storeSurvey(server, surveyor, survey, {
		survey: {
			name: 'Survey',
			stage: 'before-pour',
			surveyedOn: '2025-11-26',
			observer: 'V. Ostrander',
			instrument: 'Total station',
			serial: '4711',
		},
	});
	const { setups } = await surveyor.api.survey.get({ siteId, surveyId });
	const { fitId } = await surveyor.api.fit.make({
		siteId,
		setupId: setups[0]!.setupId,
		controlSetId,
		kind: 'levelled',
		knownScale: null,
		shelves: [],
	});
	await surveyor.api.fit.adopt({ siteId, fitId, reason: 'Residuals are nil.' });
	await secondSurveyor.api.fit.confirm({ siteId, fitId, note: 'Looked at it.' });
	const { checkId, jobId } = await surveyor.api.check.run({ siteId, revisionId, surveyId, sheetId });
	await followJob(surveyor.api, siteId, jobId);
	const { db } = server.platform;
	await db.update(checks).set({ state: 'published', publishedBy: surveyor.userId, publishedAt: new Date() }).where(eq(checks.id, checkId));
	const elements = await engineer.api.model.elements({ siteId, revisionId });
	const column = elements.find((one) => one.class === 'IfcColumn' && one.checkpointCount > 0)!;
	await db
		.update(sessions)
		.set({ freshUntil: new Date(Date.now() + 600_000) })
		.where(eq(sessions.userId, owner.userId));
	return { ...site, modelId, checkId, fitId, storey: column.storey };
}

/** A pour of the columns, with a number of its own. */
async function aPour(number: string) {
	const { siteId, engineer, companyId, modelId, storey } = site;
	const pour = { number, name: 'Columns', companyId, plannedAt: null, modelId, elements: [{ storey, class: 'IfcColumn' }] };
	return { ...site, pourId: (await engineer.api.pour.add({ siteId, pour })).pourId };
}
type APour = Awaited<ReturnType<typeof aPour>>;

async function submitted({ siteId, pourId, contractor, engineer, owner }: APour) {
	await contractor.api.pour.call({ siteId, pourId, point, readyFrom: new Date(), answers: [] });
	await engineer.api.pour.submit({ siteId, pourId, point });
	return owner.api.pour.shown({ siteId, pourId, point });
}

describe('a pour', { timeout: 180_000 }, () => {
	it('is called, submitted, released, concreted and cast; what was signed is a genuine record of what was shown', async () => {
		const pour = await aPour('7');
		const { siteId, pourId, contractor, engineer, owner, observer, surveyor } = pour;
		await engineer.api.pour.setList({ siteId, pourId, point, questions: ['Forms clean?'] });
		await expect(contractor.api.pour.call({ siteId, pourId, point, readyFrom: new Date(), answers: [''] })).rejects.toMatchObject({
			data: { code: 'list-open' },
		});
		await expect(engineer.api.pour.submit({ siteId, pourId, point })).rejects.toMatchObject({ data: { code: 'not-now' } });
		await contractor.api.pour.call({ siteId, pourId, point, readyFrom: new Date(), answers: ['yes'] });
		await engineer.api.pour.submit({ siteId, pourId, point });
		const { shown, shownSha256, readiness, whyNotSign } = await owner.api.pour.shown({ siteId, pourId, point });
		expect(readiness.filter(({ isGood }) => !isGood)).toEqual([]);
		expect(shown.isReady).toBe(true);
		expect(shown.checkpoints.length).toBeGreaterThan(0);
		expect(whyNotSign).toBeNull();
		const onBoard = async () => (await contractor.api.pour.board({ siteId })).find((row) => row.pourId === pourId);
		expect(await onBoard()).toMatchObject({ at: 3, isTaut: true, words: `Ready; waits for ${owner.name}`, hold: null });
		await expect(contractor.api.pour.beginConcreting({ siteId, pourId, at: new Date() })).rejects.toMatchObject({
			message: expect.stringContaining('Do not pour'),
		});
		const condition = { text: 'Bolt caps on', owner: 'Formwork Ltd', dueAt: new Date('2027-01-01T11:00:00Z'), proof: 'a photo' };
		const signed = await owner.api.pour.release({
			siteId,
			pourId,
			point,
			statement: 'Released as shown.',
			shownSha256,
			conditions: [condition],
		});
		const detail = await contractor.api.pour.get({ siteId, pourId });
		expect(detail).toMatchObject({
			before: 'released-with-conditions',
			isHeld: false,
			points: { 'before-pour': { recordId: signed.recordId, signedBy: owner.name } },
		});
		expect(await onBoard()).toMatchObject({ at: 4, signedBy: owner.name, conditions: [{ text: 'Bolt caps on' }] });
		const [met] = detail.points['before-pour'].conditions;
		await contractor.api.pour.meetCondition({ siteId, pourId, conditionId: met!.conditionId, words: 'Photo 3' });
		await expect(engineer.api.pour.meetCondition({ siteId, pourId, conditionId: met!.conditionId, words: 'again' })).rejects.toMatchObject({
			code: 'CONFLICT',
		});
		// What anybody gets to see of it is the same text, and it proves itself.
		const record = await observer.api.record.get({ siteId, recordId: signed.recordId });
		const file = readRecordFile(new TextEncoder().encode(record.text));
		const [key] = await server.api().record.keys();
		if (file.kind !== 'record') throw new Error(file.kind);
		const verification = await verifyRecords(file, { keys: await readPublicKeys(key!.publicKeyPem) });
		expect(verification).toMatchObject({ genuine: true, signedBy: owner.name, statement: 'Released as shown.', head: signed.head });
		expect(file.records[0]?.body).toMatchObject({ act: 'released-with-conditions', shown });
		await contractor.api.pour.beginConcreting({ siteId, pourId, at: new Date() });
		await expect(owner.api.pour.withdraw({ siteId, pourId, point: 'after-pour', statement: 'x' })).rejects.toMatchObject({
			code: 'REFUSED',
		});
		const notCast = [{ modelId: shown.elements[0]!.modelId, globalId: shown.elements[0]!.globalId }];
		const { pour: cast, restPourId } = await contractor.api.pour.endConcreting({ siteId, pourId, at: new Date(), notCast });
		expect(cast).toMatchObject({ state: 'cast-in-part', elementCount: shown.elements.length - 1 });
		expect(await contractor.api.pour.get({ siteId, pourId: restPourId! })).toMatchObject({
			number: '7b',
			state: 'planned',
			before: 'open',
			elementCount: 1,
			partOf: { number: '7' },
		});
		await expect(owner.api.pour.withdraw({ siteId, pourId, point, statement: 'x' })).rejects.toMatchObject({
			message: expect.stringContaining('never withdrawn'),
		});
		await expect(surveyor.api.pour.release({ siteId, pourId, point, statement: 'x', shownSha256, conditions: [] })).rejects.toMatchObject({
			code: 'FORBIDDEN',
		});
		const kinds = await server.platform.db.select({ kind: auditEntries.kind }).from(auditEntries).where(eq(auditEntries.subjectId, pourId));
		expect(kinds.map(({ kind }) => kind)).toEqual(
			expect.arrayContaining([
				'hold-point-called',
				'hold-point-submitted',
				'hold-point-released',
				'concreting-begun',
				'concreting-ended',
				'condition-met',
			]),
		);
	});

	it('is signed once of two at once, never for what changed meanwhile, never by who is not fresh or prepared it', async () => {
		const pour = await aPour('8');
		const { siteId, pourId, owner, engineer, checkId, fitId } = pour;
		const { db } = server.platform;
		const { shownSha256 } = await submitted(pour);
		const release = { siteId, pourId, point, statement: 'Released.', shownSha256, conditions: [] };
		const state = async () => (await db.select().from(holdPoints).where(eq(holdPoints.pourId, pourId))).map((row) => row.state).sort();
		const before = await state();
		await expect(owner.api.pour.release({ ...release, shownSha256: 'a'.repeat(64) })).rejects.toMatchObject({
			code: 'CONFLICT',
			message: expect.stringContaining('nothing was signed'),
		});
		// A check is withdrawn while someone signs.
		await db.update(checks).set({ state: 'withdrawn', withdrawnReason: 'Wrong prism' }).where(eq(checks.id, checkId));
		await expect(owner.api.pour.release(release)).rejects.toMatchObject({ code: 'CONFLICT' });
		const { shownSha256: stale } = await owner.api.pour.shown({ siteId, pourId, point });
		await expect(owner.api.pour.release({ ...release, shownSha256: stale })).rejects.toMatchObject({ data: { code: 'not-ready' } });
		await db.update(checks).set({ state: 'published', withdrawnReason: null }).where(eq(checks.id, checkId));
		await db.update(sessions).set({ freshUntil: null }).where(eq(sessions.userId, owner.userId));
		await expect(owner.api.pour.release(release)).rejects.toMatchObject({ data: { code: 'not-fresh' } });
		await db
			.update(sessions)
			.set({ freshUntil: new Date(Date.now() + 600_000) })
			.where(eq(sessions.userId, owner.userId));
		const [adopted] = await db.select({ adoptedBy: fits.adoptedBy }).from(fits).where(eq(fits.id, fitId));
		await db.update(fits).set({ adoptedBy: owner.userId }).where(eq(fits.id, fitId));
		await expect(owner.api.pour.release(release)).rejects.toMatchObject({ data: { code: 'prepared-it' } });
		expect((await owner.api.pour.shown({ siteId, pourId, point })).whyNotSign).toContain('adopted fit');
		await db.update(fits).set({ adoptedBy: adopted!.adoptedBy }).where(eq(fits.id, fitId));
		expect(await state()).toEqual(before);
		expect(await db.select().from(sealedRecords).where(eq(sealedRecords.pourId, pourId))).toEqual([]);
		const second = await server.addMember(siteId, ['owners-representative']);
		await db
			.update(sessions)
			.set({ freshUntil: new Date(Date.now() + 600_000) })
			.where(eq(sessions.userId, second.userId));
		const ends = await Promise.allSettled([owner.api.pour.release(release), second.api.pour.release(release)]);
		expect(ends.map(({ status }) => status).sort()).toEqual(['fulfilled', 'rejected']);
		expect(await db.select().from(sealedRecords).where(eq(sealedRecords.pourId, pourId))).toHaveLength(1);
		await expect(engineer.api.pour.submit({ siteId, pourId, point })).rejects.toMatchObject({ data: { code: 'not-now' } });
	});

	it('is held when what it rests on goes, until it is released anew; foreign companies do not see it', async () => {
		const pour = await aPour('9');
		const { siteId, pourId, owner, engineer, contractor, observer, checkId, otherCompanyId } = pour;
		const { db } = server.platform;
		const { shownSha256 } = await submitted(pour);
		await owner.api.pour.release({ siteId, pourId, point, statement: 'Released.', shownSha256, conditions: [] });
		expect((await observer.api.pour.get({ siteId, pourId })).hold).toBeNull();
		await db.update(checks).set({ state: 'withdrawn', withdrawnReason: 'Wrong prism' }).where(eq(checks.id, checkId));
		await expect(contractor.api.pour.beginConcreting({ siteId, pourId, at: new Date() })).rejects.toMatchObject({ data: { code: 'held' } });
		const held = await contractor.api.pour.get({ siteId, pourId });
		expect(held.hold?.reasons.join(' ')).toContain('was withdrawn');
		expect((await contractor.api.pour.seeHold({ siteId, pourId })).hold).toMatchObject({
			isSeenByYou: true,
			seen: [{ name: contractor.name }],
		});
		await expect(contractor.api.pour.seeHold({ siteId, pourId })).rejects.toMatchObject({ code: 'CONFLICT' });
		await expect(engineer.api.pour.submit({ siteId, pourId, point })).rejects.toMatchObject({ data: { code: 'not-ready' } });
		await db.update(checks).set({ state: 'published', withdrawnReason: null }).where(eq(checks.id, checkId));
		await engineer.api.pour.submit({ siteId, pourId, point });
		const again = await owner.api.pour.shown({ siteId, pourId, point });
		await owner.api.pour.release({ siteId, pourId, point, statement: 'Released anew.', shownSha256: again.shownSha256, conditions: [] });
		expect((await contractor.api.pour.get({ siteId, pourId })).hold).toBeNull();
		await owner.api.pour.withdraw({ siteId, pourId, point, statement: 'Rain came in.' });
		expect((await contractor.api.pour.get({ siteId, pourId })).hold?.reasons.join(' ')).toContain('Rain came in.');
		const { records: all, head, length } = await owner.api.record.list({ siteId });
		const records = all.filter((one) => one.pourId === pourId);
		expect(records.map(({ act, endedBy }) => [act, endedBy?.act ?? null])).toEqual([
			['withdrawn', null],
			['released', 'withdrawn'],
			['released', 'released'],
		]);
		expect(head).toBe(records[0]?.sha256);
		const foreign = await server.addMember(siteId, ['contractor'], otherCompanyId);
		const asks = [
			foreign.api.pour.get({ siteId, pourId }),
			foreign.api.pour.shown({ siteId, pourId, point }),
			foreign.api.pour.seeHold({ siteId, pourId }),
			foreign.api.record.get({ siteId, recordId: records[0]!.recordId }),
		];
		await Promise.all(asks.map((ask) => expect(ask).rejects.toMatchObject({ code: 'NOT_FOUND' })));
		expect(await foreign.api.pour.list({ siteId })).toEqual([]);
		expect(await foreign.api.record.list({ siteId })).toMatchObject({ records: [], length });
		expect((await db.select().from(pours).where(eq(pours.id, pourId)))[0]?.state).toBe('planned');
	});

	// The last: what it issues stands for the whole site.
	it('is held at once where a sheet is issued that changes its limits, and by no other', async () => {
		const pour = await aPour('11');
		const { siteId, pourId, owner, engineer } = pour;
		const { db } = server.platform;
		const { shownSha256 } = await submitted(pour);
		await owner.api.pour.release({ siteId, pourId, point, statement: 'Released.', shownSha256, conditions: [] });
		// Asked of the table: reading the pour would look by itself.
		const holds = () => db.select({ reasons: pourHolds.reasons }).from(pourHolds).where(eq(pourHolds.pourId, pourId));
		const issue = async (upperMm: number) => {
			const rules = plainSheet.rules.map((rule) => (rule.id === 'plan' ? rule : { ...rule, lowerMm: -upperMm, upperMm }));
			const sheet = { ...plainSheet, name: `Sheet of ${upperMm}`, rules };
			const { sheetId, contentSha256 } = await engineer.api.tolerance.saveDraft({ siteId, sheetId: null, seenSha256: null, sheet });
			await engineer.api.tolerance.issue({ siteId, sheetId, seenSha256: contentSha256, reason: 'Agreed.' });
		};
		await issue(20);
		expect(await holds()).toEqual([]);
		await issue(15);
		expect((await holds()).map(({ reasons }) => reasons.length > 0)).toEqual([true]);
	});
});
