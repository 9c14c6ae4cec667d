import { readFileSync } from 'node:fs';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import type { Checkpoint } from '#shared/model/model-schema.ts';
import type { ToleranceRule } from '#shared/tolerance/sheet-schema.ts';
import { deviations } from '../../server/db/schema/check.ts';
import { auditEntries } from '../../server/db/schema/record.ts';
import { aSite, type BuiltSite } from '../builders/a-site.ts';
import { asBuilt, issuedSheet, type Off, plainSheet } from '../builders/as-built.ts';
import { followJob } from '../builders/follow-job.ts';
import { readInProcess } from '../builders/read-in-process.ts';
import { readModel } from '../builders/read-model.ts';
import { aSetup, storeControl, storeSurvey } from '../builders/store-points.ts';
import { openTestServer, type TestServer } from './harness.ts';

// Not what is tried here, and seconds a time: the process of its own.
vi.mock('../../server/features/model/read-ifc-in-child.ts', () => ({ readIfcInChild: readInProcess }));

let server: TestServer;
beforeAll(async () => {
	server = await openTestServer();
});
afterAll(() => server.close());

const fixture = (name: string) => readFileSync(new URL(`../../fixtures/ifc/${name}`, import.meta.url));

/** Two faces together: what is derived is judged as well. */
const sections: ToleranceRule = { id: 'sections', match: { characteristic: 'section' }, lowerMm: -20, upperMm: 20 };

async function modelled(fileName: string) {
	const site = await aSite(server);
	const { end, revision } = await readModel(server, site.engineer, fileName, fixture(fileName), { newName: 'Frame' });
	expect(end.state).toBe('done');
	const { revisionId, modelId } = revision;
	const checkpoints = await site.surveyor.api.model.checkpoints({ siteId: site.siteId, revisionId });
	return {
		...site,
		revisionId,
		modelId,
		checkpoints,
		sheetId: await issuedSheet(server, site.engineer, { ...plainSheet, rules: [sections, ...plainSheet.rules] }),
	};
}
type Modelled = Awaited<ReturnType<typeof modelled>>;

/** Stores control and a survey of what is built off so, and adopts its fit. */
async function measured(site: BuiltSite, checkpoints: readonly Checkpoint[], off: Off = () => 0) {
	const { control, survey } = asBuilt(checkpoints, off);
	const { controlSetId } = await storeControl(server, site.surveyor, control);
	const { surveyId } = await storeSurvey(server, site.surveyor, survey);
	const { siteId, surveyor } = site;
	const { setups } = await surveyor.api.survey.get({ siteId, surveyId });
	const setupId = setups[0]!.setupId;
	const input = { siteId, setupId, controlSetId, kind: 'levelled' as const, knownScale: null, shelves: [] };
	const { fitId } = await surveyor.api.fit.make(input);
	await surveyor.api.fit.adopt({ siteId, fitId, reason: 'Residuals are nil.' });
	return { surveyId, fitId };
}

async function run({ siteId, surveyor, revisionId, sheetId }: Modelled, surveyId: string) {
	const { checkId, jobId } = await surveyor.api.check.run({ siteId, revisionId, surveyId, sheetId });
	const end = await followJob(surveyor.api, siteId, jobId);
	return { checkId, end, check: await surveyor.api.check.get({ siteId, checkId }) };
}

describe('a check', { timeout: 180_000 }, () => {
	it.each(['made-frame-foot-ifc2x3.ifc', 'made-frame-metre-ifc4.ifc', 'made-frame-mm-ifc4x3.ifc'])(
		'of %s finds what is built off, by how much and which way, and nothing else',
		async (fileName) => {
			const site = await modelled(fileName);
			const pick = (characteristic: Checkpoint['characteristic']) => site.checkpoints.find((one) => one.characteristic === characteristic)!;
			const planted = new Map([
				[pick('face').id, 34],
				[pick('level').id, -41],
				[pick('plan').id, 29],
			]);
			const { surveyId, fitId } = await measured(site, site.checkpoints, ({ id }) => planted.get(id) ?? 0);
			const { end, check, checkId } = await run(site, surveyId);
			expect(end).toMatchObject({ state: 'done', kind: 'check.compute', subjectId: checkId });
			expect(check).toMatchObject({ number: 1, state: 'trial', stage: 'as-cast', madeBy: site.surveyor.name });
			expect(check.fits).toMatchObject([{ fitId, setupName: '1', isNewest: true, adoptedBy: site.surveyor.name }]);
			expect(check.deviations.map(({ checkpointId }) => checkpointId)).toEqual(site.checkpoints.map(({ id }) => id));
			for (const deviation of check.deviations) {
				const offMm = planted.get(deviation.checkpointId);
				expect(deviation.verdict, deviation.label).toBe(offMm === undefined ? 'within' : 'outside');
				const { direction, place, measured: asFound } = deviation;
				expect(asFound).not.toBeNull();
				if (deviation.characteristic === 'face') expect(direction).not.toBeNull();
				expect(Math.abs((deviation.deviationMm ?? Number.NaN) - (offMm ?? 0)), deviation.label).toBeLessThan(0.02);
				expect(Math.hypot(...place.map((value, axis) => value - asFound![axis]!))).toBeCloseTo(Math.abs(offMm ?? 0) / 1000, 4);
			}
			expect(check.summary).toMatchObject({ outside: 3, within: check.deviations.length - 3, 'not-measured': 0 });
			expect(check.elements.length).toBe(new Set(check.deviations.map(({ elementId }) => elementId)).size);
			const csv = await (await site.observer.api.check.csv({ siteId: site.siteId, checkId })).text();
			expect(csv.trim().split('\r\n')).toHaveLength(check.deviations.length + check.derived.length + 1);
			// The one face that stands out makes its section too thick by as much, and no other.
			expect(check.derived.length).toBeGreaterThan(20);
			for (const { characteristic, deviationMm, verdict, from, uncertaintyMm } of check.derived) {
				const offMm = from.reduce((sum, id) => sum + (planted.get(id) ?? 0), 0);
				expect([characteristic, verdict]).toEqual(['section', offMm === 0 ? 'within' : 'outside']);
				expect(Math.abs(deviationMm - offMm)).toBeLessThan(0.04);
				expect(uncertaintyMm).toBeGreaterThan(0);
			}
			const kinds = await server.platform.db
				.select({ kind: auditEntries.kind })
				.from(auditEntries)
				.where(eq(auditEntries.subjectId, checkId));
			expect(kinds.map(({ kind }) => kind).sort()).toEqual(['check-computed', 'check-run']);
			const again = await run(site, surveyId);
			expect(again.check).toMatchObject({ number: 2, inputsSha256: check.inputsSha256, deviations: check.deviations });
			expect((await site.observer.api.check.list({ siteId: site.siteId })).map(({ number }) => number)).toEqual([2, 1]);
		},
	);

	it('is refused without an adopted fit, a ready model or an issued sheet, and for another site’s things', async () => {
		const site = await modelled('made-frame-mm-ifc4x3.ifc');
		const { siteId, surveyor, revisionId, sheetId, checkpoints } = site;
		const { control, survey } = asBuilt(checkpoints.slice(0, 5));
		await storeControl(server, surveyor, control);
		const unfitted = await storeSurvey(server, surveyor, survey);
		const ask = (over: Partial<{ siteId: string; revisionId: string; surveyId: string; sheetId: string }>) =>
			surveyor.api.check.run({ siteId, revisionId, sheetId, surveyId: unfitted.surveyId, ...over });
		await expect(ask({})).rejects.toMatchObject({ code: 'REFUSED', data: { code: 'no-fit' }, message: expect.stringContaining('(1)') });
		const { surveyId } = await measured(site, checkpoints.slice(0, 5));
		const next = await issuedSheet(server, site.engineer);
		await expect(ask({ surveyId })).rejects.toMatchObject({
			data: { code: 'sheet-not-issued' },
			message: expect.stringContaining('superseded'),
		});
		const failed = await readModel(server, site.engineer, 'no.ifc', 'no model at all', { newName: 'Other' });
		await expect(ask({ surveyId, sheetId: next, revisionId: failed.revision.revisionId })).rejects.toMatchObject({
			data: { code: 'revision-not-ready' },
		});
		const other = await aSite(server);
		const foreign = await issuedSheet(server, other.engineer);
		await expect(ask({ surveyId, sheetId: foreign })).rejects.toMatchObject({ code: 'NOT_FOUND' });
		const { checkId } = await ask({ surveyId, sheetId: next });
		for (const call of [
			() => other.surveyor.api.check.get({ siteId: other.siteId, checkId }),
			() => other.surveyor.api.check.csv({ siteId: other.siteId, checkId }),
			() => other.surveyor.api.check.run({ siteId: other.siteId, revisionId, surveyId, sheetId: foreign }),
			() => other.surveyor.api.tolerance.get({ siteId: other.siteId, sheetId: next }),
		]) {
			await expect(call()).rejects.toMatchObject({ code: 'NOT_FOUND' });
		}
		expect(await other.surveyor.api.check.list({ siteId: other.siteId })).toEqual([]);

		// A set-up without fit: its points are left out, and that is said.
		const both = survey
			.trim()
			.split('\n')
			.flatMap((line, index) => (index === 0 ? [`setup,${line}`] : [`A,${line}`, `B,${line}`]))
			.join('\n');
		const twoSetups = await storeSurvey(server, surveyor, both, { setups: [aSetup({ name: 'A' }), aSetup({ name: 'B' })] });
		const { setups } = await surveyor.api.survey.get({ siteId, surveyId: twoSetups.surveyId });
		const [{ controlSetId }] = (await surveyor.api.control.list({ siteId })) as [{ controlSetId: string }, ...unknown[]];
		const setupId = setups.find(({ name }) => name === 'A')!.setupId;
		const made = await surveyor.api.fit.make({ siteId, setupId, controlSetId, kind: 'levelled', knownScale: null, shelves: [] });
		await surveyor.api.fit.adopt({ siteId, fitId: made.fitId, reason: 'One of two.' });
		const partly = await run({ ...site, sheetId: next }, twoSetups.surveyId);
		expect(partly.check.findings).toContainEqual(
			expect.objectContaining({ code: 'setup-without-fit', message: expect.stringContaining('Set-up B has no adopted fit: its 9 points') }),
		);
		expect(new Set(partly.check.deviations.flatMap(({ setupId: by }) => by ?? []))).toEqual(new Set([setupId]));
	});

	it('leaves out targets that the fit took for marks, and points that were voided, and has another hash then', async () => {
		const site = await modelled('made-frame-mm-ifc4x3.ifc');
		const { siteId, surveyor, checkpoints } = site;
		const { control, survey } = asBuilt(checkpoints.slice(0, 5));
		const { controlSetId } = await storeControl(server, surveyor, control);
		const { surveyId } = await storeSurvey(server, surveyor, survey.replace('\nT1,', '\n101,'));
		const setupId = (await surveyor.api.survey.get({ siteId, surveyId })).setups[0]!.setupId;
		const relabellings = [{ target: '101', mark: 'T1', reason: 'By mutual distances.' }];
		const about = { siteId, setupId, controlSetId, kind: 'levelled' as const, knownScale: null, shelves: [] };
		const { fitId } = await surveyor.api.fit.make({ ...about, relabellings });
		await surveyor.api.fit.adopt({ siteId, fitId, reason: 'Residuals are nil.' });
		const whole = await run(site, surveyId);
		expect(whole.check.unmatchedPoints).toEqual([]);
		expect(whole.check.isSecondPersonAsked).toBe(true);
		// Row 1 is the header, 2 to 5 the targets: the first two shots.
		await surveyor.api.survey.voidPoints({ siteId, setupId, fromRow: 6, toRow: 7, reason: 'Tripod knocked.' });
		const fewer = await run(site, surveyId);
		expect(whole.check.summary['not-measured'] + 2).toBe(fewer.check.summary['not-measured']);
		expect(fewer.check.inputsSha256).not.toBe(whole.check.inputsSha256);
		expect((await surveyor.api.check.get({ siteId, checkId: whole.checkId })).summary).toEqual(whole.check.summary);
	});

	it('that meets nothing ends failed, with what is likely wrong, and stores no deviation', async () => {
		const site = await modelled('made-frame-mm-ifc4x3.ifc');
		const far = site.checkpoints.map((checkpoint, index) => {
			const [x, y, z] = checkpoint.place;
			return { ...checkpoint, id: `P${index}`, place: [x + 400, y, z] as [number, number, number] };
		});
		const { surveyId } = await measured(site, far);
		const { end, check, checkId } = await run(site, surveyId);
		expect(end).toMatchObject({ state: 'failed', reason: expect.stringMatching(/^None of the \d+ points met a checkpoint/) });
		expect(check).toMatchObject({ state: 'failed', reason: end.reason, deviations: [], summary: { within: 0 } });
		expect(await server.platform.db.select().from(deviations).where(eq(deviations.checkId, checkId))).toEqual([]);
		const targetsOnly = await storeSurvey(server, site.surveyor, asBuilt(far).survey.split('\n').slice(0, 5).join('\n'));
		const { setups } = await site.surveyor.api.survey.get({ siteId: site.siteId, surveyId: targetsOnly.surveyId });
		expect(setups[0]).toMatchObject({ pointCount: 4, targetCount: 4 });
	});

	it('shows a contractor the elements of its own pours alone, counted anew', async () => {
		const site = await modelled('made-frame-mm-ifc4x3.ifc');
		const { siteId, engineer, contractor, companyId, otherCompanyId, modelId } = site;
		const { surveyId } = await measured(site, site.checkpoints);
		const { checkId, check } = await run(site, surveyId);
		const asked = { siteId, checkId };
		await expect(contractor.api.check.get(asked)).rejects.toMatchObject({ code: 'NOT_FOUND' });
		const { planSha256 } = await site.surveyor.api.check.publishPlan(asked);
		await site.surveyor.api.check.publish({ ...asked, answerBy: new Date(Date.now() + 86_400_000), planSha256 });
		expect(await contractor.api.check.get(asked)).toMatchObject({ deviations: [], elements: [], summary: { within: 0 } });
		const storeyOf = (ifcClass: string) => check.elements.find((element) => element.class === ifcClass)!.storey;
		const kind = (ifcClass: string) => ({ storey: storeyOf(ifcClass), class: ifcClass });
		const addPour = (number: string, company: string, ifcClass: string) =>
			engineer.api.pour.add({
				siteId,
				pour: { number, name: ifcClass, companyId: company, plannedAt: null, modelId, elements: [kind(ifcClass)] },
			});
		const own = await addPour('1', companyId, 'IfcColumn');
		await addPour('2', companyId, 'IfcColumn');
		const others = await addPour('3', otherCompanyId, 'IfcWall');
		const seen = await contractor.api.check.get(asked);
		expect(seen.elements).toHaveLength(own.elementCount);
		expect(new Set(seen.elements.map((element) => element.class))).toEqual(new Set(['IfcColumn']));
		expect(seen.elements.every(({ pourIds }) => pourIds.length === 2 && pourIds.includes(own.pourId))).toBe(true);
		const ownIds = new Set(seen.elements.map(({ elementId }) => elementId));
		expect(seen.deviations).toEqual(check.deviations.filter(({ elementId }) => ownIds.has(elementId)));
		expect(seen.summary.within).toBe(seen.deviations.length);
		expect((await contractor.api.check.list({ siteId }))[0]?.summary).toEqual(seen.summary);
		expect((await (await contractor.api.check.csv(asked)).text()).trim().split('\r\n')).toHaveLength(
			seen.deviations.length + seen.derived.length + 1,
		);
		const ownPoints = new Set(seen.deviations.map(({ checkpointId }) => checkpointId));
		expect(seen.derived.every(({ from }) => from.every((id) => ownPoints.has(id)))).toBe(true);
		const whole = await engineer.api.check.get(asked);
		expect(whole.deviations).toEqual(check.deviations);
		expect(whole.elements.filter(({ pourIds }) => pourIds.includes(others.pourId)).length).toBe(others.elementCount);
		expect((await contractor.api.pour.list({ siteId })).map(({ number }) => number)).toEqual(['1', '2']);
		expect((await engineer.api.pour.list({ siteId })).map(({ number }) => number)).toEqual(['1', '2', '3']);
	});
});
