import { readFileSync } from 'node:fs';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { holdPoints, pourElements, pours } from '../../server/db/schema/pour.ts';
import { auditEntries } from '../../server/db/schema/record.ts';
import { aSite, type BuiltSite } from '../builders/a-site.ts';
import { readModel } from '../builders/read-model.ts';
import { openTestServer, type TestServer } from './harness.ts';

let server: TestServer;
let site: BuiltSite;
let modelId: string;
let revisionId: string;
beforeAll(async () => {
	server = await openTestServer();
	site = await aSite(server);
	const file = readFileSync(new URL('../../fixtures/ifc/made-frame-mm-ifc4x3.ifc', import.meta.url));
	({ modelId, revisionId } = (await readModel(server, site.engineer, 'frame.ifc', file, { newName: 'Frame' })).revision);
});
afterAll(() => server.close());

describe('pours', () => {
	it('hold the elements of the kinds chosen, once, with both hold points open', async () => {
		const { siteId, engineer, companyId } = site;
		const elements = await engineer.api.model.elements({ siteId, revisionId });
		const kinds = [
			...new Set(
				elements.filter((one) => one.class === 'IfcColumn' || one.class === 'IfcSlab').map((one) => `${one.storey}\n${one.class}`),
			),
		];
		const chosen = kinds.map((kind) => ({ storey: kind.split('\n')[0]!, class: kind.split('\n')[1]! }));
		const plannedAt = new Date('2026-12-05T07:00:00Z');
		const pour = { number: '7', name: 'Columns and slabs', companyId, plannedAt, modelId, elements: [...chosen, ...chosen] };
		const added = await engineer.api.pour.add({ siteId, pour });
		const expected = elements.filter((one) => kinds.includes(`${one.storey}\n${one.class}`)).map(({ globalId }) => globalId);
		expect(added).toMatchObject({ number: '7', companyName: 'Formwork Ltd', plannedAt, elementCount: expected.length });
		const rows = await server.platform.db.select().from(pourElements).where(eq(pourElements.pourId, added.pourId));
		expect(rows.map(({ globalId }) => globalId).sort()).toEqual([...expected].sort());
		const points = await server.platform.db.select().from(holdPoints).where(eq(holdPoints.pourId, added.pourId));
		expect(points.map(({ kind, state }) => `${kind} ${state}`).sort()).toEqual(['after-pour open', 'before-pour open']);
		const kindsOnRecord = await server.platform.db.select().from(auditEntries).where(eq(auditEntries.subjectId, added.pourId));
		expect(kindsOnRecord.map(({ kind }) => kind)).toEqual(['pour-added']);
		const later = await engineer.api.pour.add({ siteId, pour: { ...pour, number: '8', plannedAt: null } });
		const earlier = await engineer.api.pour.add({ siteId, pour: { ...pour, number: '9', plannedAt: new Date('2026-12-01T07:00:00Z') } });
		expect((await engineer.api.pour.list({ siteId })).map(({ pourId }) => pourId)).toEqual([earlier.pourId, added.pourId, later.pourId]);
	});

	it('take elements in and out, and give some to another company, until they are submitted', async () => {
		const { siteId, engineer, companyId, otherCompanyId, contractor } = site;
		const elements = await engineer.api.model.elements({ siteId, revisionId });
		const [column] = elements.filter((one) => one.class === 'IfcColumn');
		const slab = elements.find((one) => one.class === 'IfcSlab')!;
		const kinds = [{ storey: column!.storey, class: 'IfcColumn' }];
		const pour = { number: '30', name: 'Columns', companyId, plannedAt: null, modelId, elements: kinds };
		const { pourId, elementCount } = await engineer.api.pour.add({ siteId, pour });
		const [first, other] = [
			{ modelId, globalId: column!.globalId },
			{ modelId, globalId: slab.globalId },
		];
		const changed = await engineer.api.pour.changeElements({ siteId, pourId, add: [other, other, first], takeOut: [] });
		expect(changed.elementCount).toBe(elementCount + 1);
		expect((await engineer.api.pour.changeElements({ siteId, pourId, add: [], takeOut: [first] })).elementCount).toBe(elementCount);
		await engineer.api.pour.giveElements({ siteId, pourId, elements: [other], companyId: otherCompanyId });
		const { shown } = await engineer.api.pour.shown({ siteId, pourId, point: 'before-pour' });
		expect(shown.elements.find(({ globalId }) => globalId === slab.globalId)?.company).toBe('Steel Ltd');
		const asks = [
			engineer.api.pour.changeElements({ siteId, pourId, add: [{ modelId, globalId: 'nowhere' }], takeOut: [other] }),
			engineer.api.pour.giveElements({ siteId, pourId, elements: [first], companyId }),
		];
		await Promise.all(asks.map((ask) => expect(ask).rejects.toMatchObject({ code: 'REFUSED' })));
		await expect(contractor.api.pour.changeElements({ siteId, pourId, add: [], takeOut: [other] })).rejects.toMatchObject({
			code: 'FORBIDDEN',
		});
		const { db } = server.platform;
		const rows = await db.select().from(pourElements).where(eq(pourElements.pourId, pourId));
		expect(rows).toHaveLength(elementCount);
		const all = rows.map(({ globalId }) => ({ modelId, globalId }));
		await expect(engineer.api.pour.changeElements({ siteId, pourId, add: [], takeOut: all })).rejects.toMatchObject({
			data: { code: 'nothing-left' },
		});
		await db.update(holdPoints).set({ state: 'submitted' }).where(eq(holdPoints.pourId, pourId));
		await expect(engineer.api.pour.changeElements({ siteId, pourId, add: [], takeOut: [other] })).rejects.toMatchObject({
			data: { code: 'not-now' },
		});
	});

	it('are refused with a number that is taken, a kind that is not there, or things of another site; nothing is stored', async () => {
		const { siteId, engineer } = site;
		const other = await aSite(server);
		const element = (await engineer.api.model.elements({ siteId, revisionId }))[0]!;
		const pour = {
			number: '20',
			name: 'Pour',
			companyId: site.companyId,
			plannedAt: null,
			modelId,
			elements: [{ storey: element.storey, class: element.class }],
		};
		await engineer.api.pour.add({ siteId, pour });
		const before = await server.platform.db.select().from(pours);
		const refusals = [
			[pour, { code: 'REFUSED', data: { code: 'number-taken' } }],
			[
				{ ...pour, number: '21', elements: [{ storey: 'Nowhere', class: 'IfcWall' }] },
				{ code: 'REFUSED', data: { code: 'no-elements' } },
			],
			[{ ...pour, number: '22', companyId: other.companyId }, { code: 'NOT_FOUND' }],
			[{ ...pour, number: '23', elements: [] }, { code: 'BAD_REQUEST' }],
		] as const;
		for (const [form, error] of refusals) {
			await expect(engineer.api.pour.add({ siteId, pour: { ...form, elements: [...form.elements] } })).rejects.toMatchObject(error);
		}
		const foreign = { ...pour, companyId: other.companyId };
		await expect(other.engineer.api.pour.add({ siteId: other.siteId, pour: foreign })).rejects.toMatchObject({ code: 'NOT_FOUND' });
		await expect(site.surveyor.api.pour.add({ siteId, pour: { ...pour, number: '24' } })).rejects.toMatchObject({ code: 'FORBIDDEN' });
		expect(await server.platform.db.select().from(pours)).toEqual(before);
	});
});
