import { readFileSync } from 'node:fs';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { designToMap, mapFrameOf } from '#shared/control/map-frame.ts';
import type { StoredCheckpoint, StoredElement } from '#shared/model/contract.ts';
import { auditEntries } from '../../server/db/schema/record.ts';
import { aSite, type BuiltSite } from '../builders/a-site.ts';
import { asBuilt, issuedSheet } from '../builders/as-built.ts';
import { followJob } from '../builders/follow-job.ts';
import { readInProcess } from '../builders/read-in-process.ts';
import { readModel } from '../builders/read-model.ts';
import { storeControl, storeSurvey } from '../builders/store-points.ts';
import { openTestServer, type TestServer } from './harness.ts';

// Not what is tried here, and seconds a time: the process of its own.
vi.mock('../../server/features/model/read-ifc-in-child.ts', () => ({ readIfcInChild: readInProcess }));

/** What persons say of a model: left out, renamed, added; in checks, in field lists, and in the next revision. One site for all of it. */
let server: TestServer;
let site: BuiltSite;
let revisionId: string;
let modelId: string;
let elements: StoredElement[];
let checkpoints: StoredCheckpoint[];

const file = readFileSync(new URL('../../fixtures/ifc/made-frame-mm-ifc4x3.ifc', import.meta.url), 'utf8');

beforeAll(async () => {
	server = await openTestServer();
	site = await aSite(server);
	const { revision } = await readModel(server, site.engineer, 'frame.ifc', file, { newName: 'Frame' });
	({ revisionId, modelId } = revision);
	await look(revisionId);
}, 120_000);
afterAll(() => server.close());

async function look(ofRevision: string): Promise<void> {
	const asked = { siteId: site.siteId, revisionId: ofRevision };
	elements = await site.observer.api.model.elements(asked);
	checkpoints = await site.observer.api.model.checkpoints(asked);
}
const column = (tag: string): StoredElement => elements.find((element) => element.tag === tag)!;
const ofElement = ({ globalId }: StoredElement): StoredCheckpoint[] => checkpoints.filter((one) => one.globalId === globalId);
const base = () => ({ siteId: site.siteId, revisionId });
async function auditOf(kind: string) {
	const rows = await server.platform.db.select().from(auditEntries).where(eq(auditEntries.siteId, site.siteId));
	return rows.filter((row) => row.kind === kind);
}

describe('checkpoints chosen', { timeout: 120_000 }, () => {
	it('are left out for a reason, by sample, and required again, many at once', async () => {
		const { api } = site.surveyor;
		const ids = ofElement(column('C-A1')).map(({ id }) => id);
		await expect(
			api.model.chooseCheckpoints({ ...base(), checkpointIds: ids, requirement: 'left-out', reason: null }),
		).rejects.toMatchObject({ code: 'REFUSED', data: { code: 'reason-missing', where: 'reason' } });
		const reason = 'Behind the lift shaft’s form, cannot be seen';
		expect(await api.model.chooseCheckpoints({ ...base(), checkpointIds: ids, requirement: 'left-out', reason })).toEqual({
			changed: ids.length,
		});
		await look(revisionId);
		for (const one of ofElement(column('C-A1'))) {
			expect(one).toMatchObject({ requirement: 'left-out', choice: { by: site.surveyor.name, reason } });
		}
		expect(ofElement(column('C-A2')).every(({ requirement, choice }) => requirement === 'required' && choice === null)).toBe(true);
		await api.model.chooseCheckpoints({ ...base(), checkpointIds: ids.slice(0, 1), requirement: 'by-sample', reason: null });
		await api.model.chooseCheckpoints({ ...base(), checkpointIds: ids.slice(1, 2), requirement: 'required', reason: null });
		await look(revisionId);
		const said = ofElement(column('C-A1')).map(({ requirement }) => requirement);
		expect(said.slice(0, 3)).toEqual(['by-sample', 'required', 'left-out']);
		expect((await auditOf('checkpoints-chosen')).map(({ data }) => (data as { requirement: string }).requirement).sort()).toEqual([
			'by-sample',
			'left-out',
			'required',
		]);
	});

	it('change nothing where one of them is not there, is another site’s, or the input is wrong', async () => {
		const { api } = site.surveyor;
		const [first] = ofElement(column('C-B1'));
		const ask = (over: object) =>
			api.model.chooseCheckpoints({ ...base(), checkpointIds: [first!.id], requirement: 'left-out', reason: 'So.', ...over });
		await expect(ask({ checkpointIds: [first!.id, 'nowhere'] })).rejects.toMatchObject({ code: 'NOT_FOUND' });
		await expect(ask({ checkpointIds: [] })).rejects.toMatchObject({ code: 'BAD_REQUEST' });
		await expect(ask({ reason: ' ' })).rejects.toMatchObject({ code: 'BAD_REQUEST' });
		await expect(ask({ requirement: 'maybe' })).rejects.toMatchObject({ code: 'BAD_REQUEST' });
		const other = await aSite(server);
		await expect(
			other.surveyor.api.model.chooseCheckpoints({
				siteId: other.siteId,
				revisionId,
				checkpointIds: [first!.id],
				requirement: 'left-out',
				reason: 'So.',
			}),
		).rejects.toMatchObject({ code: 'NOT_FOUND' });
		await look(revisionId);
		expect(ofElement(column('C-B1'))[0]).toMatchObject({ requirement: 'required', choice: null });
	});
});

describe('names', { timeout: 120_000 }, () => {
	const rename = (marks: { elementId: string; mark: string }[]) => site.engineer.api.model.renameMarks({ ...base(), marks });

	it('are given to elements, their checkpoints with them, and may be exchanged', async () => {
		const [one, other] = [column('C-B1'), column('C-B2')];
		const ends = ofElement(one).map(({ mark }) => mark.slice(one.mark.length));
		expect(await rename([{ elementId: one.elementId, mark: 'RIVER 1' }])).toEqual({ changed: 1 });
		await look(revisionId);
		expect(column('C-B1').mark).toBe('RIVER 1');
		expect(ofElement(column('C-B1')).map(({ mark }) => mark)).toEqual(ends.map((end) => `RIVER 1${end}`));
		await rename([
			{ elementId: one.elementId, mark: other.mark },
			{ elementId: other.elementId, mark: 'RIVER 1' },
		]);
		await look(revisionId);
		expect([column('C-B1').mark, column('C-B2').mark]).toEqual([other.mark, 'RIVER 1']);
		expect(await rename([{ elementId: other.elementId, mark: 'RIVER 1' }])).toEqual({ changed: 0 });
		expect(await auditOf('marks-renamed')).toHaveLength(2);
	});

	it('are refused where they would stand for two, are too long for the field, or cannot be kept', async () => {
		const [one, other] = [column('C-C1'), column('C-C2')];
		const before = one.mark;
		const lower = other.mark.toLowerCase().replace('-', '_');
		await expect(rename([{ elementId: one.elementId, mark: lower }])).rejects.toMatchObject({
			code: 'REFUSED',
			data: { code: 'mark-not-possible', where: 'marks.0.mark' },
			message: expect.stringContaining(other.mark),
		});
		await expect(
			rename([
				{ elementId: other.elementId, mark: 'SAME' },
				{ elementId: one.elementId, mark: 'same' },
			]),
		).rejects.toMatchObject({ data: { code: 'mark-not-possible' } });
		await expect(rename([{ elementId: one.elementId, mark: 'SIXTEEN LETTERS1' }])).rejects.toMatchObject({
			data: { code: 'mark-not-possible' },
			message: expect.stringMatching(/may have 1\d\.$/),
		});
		for (const mark of ['', 'seventeen letters', '=A1', 'A.1', 'a,b', 'a\nb']) {
			await expect(rename([{ elementId: one.elementId, mark }])).rejects.toMatchObject({ code: 'BAD_REQUEST' });
		}
		await expect(rename([{ elementId: site.siteId, mark: 'X' }])).rejects.toMatchObject({ code: 'NOT_FOUND' });
		const twice = [one, one].map(({ elementId }, at) => ({ elementId, mark: `X${at}` }));
		await expect(rename(twice)).rejects.toMatchObject({ data: { code: 'element-twice' } });
		await look(revisionId);
		expect(column('C-C1').mark).toBe(before);
	});
});

describe('a checkpoint of one’s own', { timeout: 120_000 }, () => {
	const add = (over: object) => {
		const { boxM, elementId } = column('C-A2');
		const middle = boxM!.min.map((low, axis) => (low + boxM!.max[axis]!) / 2) as [number, number, number];
		const picked = {
			elementId,
			place: middle,
			normal: [1, 0, 0] as [number, number, number],
			label: 'At the door’s jamb',
			reason: 'The door maker asked.',
		};
		return site.surveyor.api.model.addCheckpoint({ ...base(), ...picked, ...over });
	};

	it('is placed on the very plane of the reading’s, for a face and for a level', async () => {
		const element = column('C-A2');
		const face = ofElement(element).find(({ characteristic }) => characteristic === 'face')!;
		const level = ofElement(element).find(({ characteristic, isSoffit }) => characteristic === 'level' && !isSoffit)!;
		// As a picture in single precision gives it: a little beside the plane, the normal a little off.
		const [nx, ny, nz] = face.direction!;
		const near = face.place.map((part, axis) => part + (axis === 2 ? 0.11 : [nx, ny][axis]! * 0.0004)) as [number, number, number];
		const one = await add({ place: near, normal: [nx + 1e-4, ny - 1e-4, nz] });
		const other = await add({ place: [level.place[0] + 0.03, level.place[1], level.place[2] - 0.0003], normal: [0, 0, 1] });
		await look(revisionId);
		const added = (id: string) => checkpoints.find((checkpoint) => checkpoint.id === id)!;
		expect(added(one.checkpointId)).toMatchObject({
			mark: `${element.mark}.X1`,
			characteristic: 'face',
			direction: face.direction,
			label: 'At the door’s jamb',
			added: { by: site.surveyor.name, reason: 'The door maker asked.' },
		});
		const off = added(one.checkpointId).place.reduce((sum, part, axis) => sum + (part - face.place[axis]!) * face.direction![axis]!, 0);
		expect(Math.abs(off)).toBeLessThan(1e-9);
		expect(added(other.checkpointId)).toMatchObject({ mark: `${element.mark}.X2`, characteristic: 'level', surface: level.surface });
		expect(added(other.checkpointId).place[2]).toBeCloseTo(level.place[2], 9);
		expect(await auditOf('checkpoint-added')).toHaveLength(2);
	});

	it('is refused off the element, without a direction, and on another site’s', async () => {
		await expect(add({ place: [0, 0, 500] })).rejects.toMatchObject({ code: 'REFUSED', data: { code: 'not-on-element' } });
		await expect(add({ normal: [0, 0, 0] })).rejects.toMatchObject({ data: { code: 'no-direction' } });
		await expect(add({ label: '' })).rejects.toMatchObject({ code: 'BAD_REQUEST' });
		await expect(add({ elementId: site.siteId })).rejects.toMatchObject({ code: 'NOT_FOUND' });
	});
});

describe('what was said', { timeout: 180_000 }, () => {
	it('goes into the list for the field, in both frames', async () => {
		const text = await (await site.contractor.api.model.fieldCsv({ ...base(), frame: 'design', storey: null })).text();
		const [head, ...rows] = text.trim().split('\n');
		expect(head).toBe('mark,easting,northing,height,code');
		const asked = checkpoints.filter(({ requirement }) => requirement !== 'left-out');
		expect(rows.map((row) => row.split(',')[0])).toEqual(asked.map(({ mark }) => mark));
		expect(rows.length).toBeLessThan(checkpoints.length);
		expect(rows.some((row) => row.startsWith('RIVER 1.'))).toBe(true);
		expect(new Set(rows.map((row) => row.split(',')[0])).size).toBe(rows.length);
		expect(Math.max(...rows.map((row) => row.split(',')[0]!.length))).toBeLessThanOrEqual(16);
		const mapped = await (await site.observer.api.model.fieldCsv({ ...base(), frame: 'map', storey: null })).text();
		const { reading } = await site.observer.api.model.revision(base());
		const frame = mapFrameOf(reading.mapConversion!, reading.metresPerUnit);
		const [, first] = mapped.trim().split('\n');
		expect(first!.split(',').slice(1, 4)).toEqual(designToMap(frame, asked[0]!.place).map((part) => part.toFixed(4)));
		await expect(site.observer.api.model.fieldCsv({ ...base(), frame: 'map', storey: 'Nowhere' })).rejects.toMatchObject({
			data: { code: 'nothing-to-list' },
		});
	});

	it('counts in a check: points meet by the new names, what was left out is not asked for, and the check says so', async () => {
		const { surveyor, siteId } = site;
		const built = column('C-B2');
		// Named by mark, as they come back from the field.
		const shot = [...ofElement(built), ...checkpoints.filter(({ added }) => added !== null)].map((one) => ({ ...one, id: one.mark }));
		const { control, survey } = asBuilt(shot);
		const { controlSetId } = await storeControl(server, surveyor, control);
		const { surveyId } = await storeSurvey(server, surveyor, survey);
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
		const sheetId = await issuedSheet(server, site.engineer);
		const run = async () => {
			const { checkId, jobId } = await surveyor.api.check.run({ siteId, revisionId, surveyId, sheetId });
			expect(await followJob(surveyor.api, siteId, jobId)).toMatchObject({ state: 'done' });
			return surveyor.api.check.get({ siteId, checkId });
		};
		const check = await run();
		const measured = check.deviations.filter(({ deviationMm }) => deviationMm !== null).map(({ checkpointId }) => checkpointId);
		for (const { mark } of shot) expect(measured, mark).toContain(checkpoints.find((one) => one.mark === mark)!.id);
		const leftOut = checkpoints.filter(({ requirement }) => requirement === 'left-out');
		expect(check.leftOut).toEqual([{ reason: 'Behind the lift shaft’s form, cannot be seen', by: surveyor.name, count: leftOut.length }]);
		expect(check.deviations).toHaveLength(checkpoints.length - leftOut.length);
		// Asked for again, it counts again: and the check before stays what it was.
		await surveyor.api.model.chooseCheckpoints({
			...base(),
			checkpointIds: leftOut.map(({ id }) => id),
			requirement: 'required',
			reason: null,
		});
		const again = await run();
		expect(again.leftOut).toBeUndefined();
		expect(again.deviations).toHaveLength(checkpoints.length);
		expect(again.inputsSha256).not.toBe(check.inputsSha256);
		expect((await surveyor.api.check.get({ siteId, checkId: check.checkId })).leftOut).toEqual(check.leftOut);
		// A trial is none of the contractor's.
		await expect(site.contractor.api.check.get({ siteId, checkId: check.checkId })).rejects.toMatchObject({ code: 'NOT_FOUND' });
	});

	it('outlives the revision; what stood on an element that moved is told of', async () => {
		await site.surveyor.api.model.chooseCheckpoints({
			...base(),
			checkpointIds: ofElement(column('C-C1')).map(({ id }) => id),
			requirement: 'by-sample',
			reason: null,
		});
		const before = { marks: ofElement(column('C-B2')).map(({ mark }) => mark), added: checkpoints.filter(({ added }) => added !== null) };
		const same = await readModel(server, site.engineer, 'frame.ifc', `${file}\n`, { modelId });
		await look(same.revision.revisionId);
		expect(column('C-B2').mark).toBe('RIVER 1');
		expect(ofElement(column('C-B2')).map(({ mark }) => mark)).toEqual(before.marks);
		expect(ofElement(column('C-C1')).every(({ requirement }) => requirement === 'by-sample')).toBe(true);
		expect(checkpoints.filter(({ added }) => added !== null)).toMatchObject(
			before.added.map(({ id, place, mark, label }) => ({ id, place, mark, label })),
		);
		// The older revision is closed to what would be lost with the next.
		const late = site.engineer.api.model.renameMarks({ ...base(), marks: [{ elementId: column('C-B2').elementId, mark: 'LATE' }] });
		await expect(late).rejects.toMatchObject({ code: 'REFUSED', data: { code: 'not-newest' } });
		const moved = file.replace(/IFCCARTESIANPOINT\(\(0\.,7200\.,0\.\)\)/, 'IFCCARTESIANPOINT((20.,7200.,0.))');
		expect(moved).not.toBe(file);
		const next = await readModel(server, site.engineer, 'frame.ifc', moved, { modelId });
		await look(next.revision.revisionId);
		expect(checkpoints.filter(({ added }) => added !== null)).toEqual([]);
		const { reading } = await site.observer.api.model.revision({ siteId: site.siteId, revisionId: next.revision.revisionId });
		expect(reading.findings.find(({ code }) => code === 'added-checkpoint-lost')).toMatchObject({
			message: expect.stringContaining('At the door’s jamb'),
			evidence: { count: 2 },
		});
	});
});
