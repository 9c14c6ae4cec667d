import { readFileSync } from 'node:fs';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { designToMap } from '../../fixtures/demo/site.ts';
import { controlPoints, controlSets } from '../../server/db/schema/control.ts';
import { uploads } from '../../server/db/schema/file.ts';
import { aSite, type BuiltSite } from '../builders/a-site.ts';
import { readModel } from '../builders/read-model.ts';
import { proposedReading, storeControl } from '../builders/store-points.ts';
import { uploadFile } from '../builders/upload-file.ts';
import { openTestServer, type TestServer } from './harness.ts';

let server: TestServer;
let site: BuiltSite;
beforeAll(async () => {
	server = await openTestServer();
});
afterAll(() => server.close());

const csv = (name: string) => readFileSync(new URL(`../../fixtures/csv/${name}`, import.meta.url));
const demo = (name: string) => readFileSync(new URL(`../../fixtures/demo/${name}`, import.meta.url));
const setCount = async (siteId: string) =>
	(await server.platform.db.select({ id: controlSets.id }).from(controlSets).where(eq(controlSets.siteId, siteId))).length;

describe('control', () => {
	it('stores a list, and gives it back as it was given', async () => {
		site = await aSite(server);
		const set = await storeControl(server, site.surveyor, demo('control-design.csv'), { name: 'Control of November' });
		expect(set).toMatchObject({ number: 1, name: 'Control of November', pointCount: 9, frame: 'design', storedBy: site.surveyor.name });
		const { points } = await site.observer.api.control.get({ siteId: site.siteId, controlSetId: set.controlSetId });
		const lines = demo('control-design.csv').toString('utf8').trim().split('\n').slice(1);
		expect(points.map(({ name, givenM, sigmaPlanM, sigmaHeightM }) => [name, ...givenM, sigmaPlanM, sigmaHeightM])).toEqual(
			lines.map((line) => line.split(',').map((cell, index) => (index === 0 ? cell : Number(cell)))),
		);
		expect(points.map(({ designM }) => designM)).toEqual(points.map(({ givenM }) => givenM));
		expect((await storeControl(server, site.surveyor, demo('control-design.csv'))).number).toBe(2);
		expect((await site.observer.api.control.list({ siteId: site.siteId })).map(({ number }) => number)).toEqual([2, 1]);
	});

	it.each([
		['text for a number', 'text-for-a-number.csv', /is not a number/],
		['a name twice', 'duplicate-names.csv', /P1 stands in row \d+ already/],
		['not-finite numbers', 'not-finite.csv', /is not a finite number/],
		['a negative σ', 'negative-sigma.csv', /is negative/],
		['a zip file', 'zip-renamed.csv', /ZIP/],
		['no byte', 'empty.csv', /empty/],
		['no rows', 'header-only.csv', /no rows/],
	])('refuses a list with %s whole, naming the rows, and may be tried again', async (_, fileName, sentence) => {
		const fresh = await aSite(server);
		const content = csv(fileName);
		const uploadId = await uploadFile(server, fresh.surveyor, fileName, content);
		const said = { siteId: fresh.siteId, uploadId, name: 'Bad', frame: 'design' as const, defaultSigmaM: null };
		const call = () => fresh.surveyor.api.control.store({ ...said, reading: proposedReading(content) });
		const error = await call().catch((thrown: unknown) => thrown);
		expect(error).toMatchObject({ code: 'FAULTS', status: 422 });
		const { data, message } = error as { data: { rowCount: number; faults: { row: number; message: string }[] }; message: string };
		expect(message).toMatch(/othing was stored/);
		expect(data.faults.map((fault) => fault.message).join('\n')).toMatch(sentence);
		expect(await setCount(fresh.siteId)).toBe(0);
		const [upload] = await server.platform.db.select().from(uploads).where(eq(uploads.id, uploadId));
		expect(upload?.usedAt).toBeNull();
		await expect(call()).rejects.toMatchObject({ code: 'FAULTS' });
	});

	it('reads decimal commas, a byte order mark, Windows-1252 and benchmarks without plan', async () => {
		const fresh = await aSite(server);
		const pointsOf = async (content: string | Uint8Array) => {
			const { controlSetId } = await storeControl(server, fresh.surveyor, content);
			return (await fresh.surveyor.api.control.get({ siteId: fresh.siteId, controlSetId })).points;
		};
		const plain = (await pointsOf(csv('plain.csv'))).map(({ name, givenM }) => ({ name, givenM }));
		for (const fileName of ['decimal-comma.csv', 'byte-order-mark.csv', 'tabs.csv', 'utf-16le.csv']) {
			expect(
				(await pointsOf(csv(fileName))).map(({ name, givenM }) => ({ name, givenM })),
				fileName,
			).toEqual(plain);
		}
		expect((await pointsOf(csv('windows-1252.csv'))).map(({ name }) => name)).toEqual(expect.arrayContaining(['Stütze 3', 'Fuß–A', 'P€']));
		const [benchmark] = await pointsOf('name,easting,northing,height,sigma_plan,sigma_height\nBM1,,,12.345,,0.001\nT1,1,2,3,0.002,0.001\n');
		expect(benchmark).toMatchObject({ givenM: [null, null, 12.345], sigmaPlanM: null, sigmaHeightM: 0.001 });
	});

	it('remembers the order of columns only where a file did not tell it', async () => {
		const fresh = await aSite(server);
		const orderOf = async () => (await fresh.surveyor.api.site.get({ siteId: fresh.siteId })).columnOrder;
		await storeControl(server, fresh.surveyor, csv('plain.csv'));
		expect(await orderOf()).toBeNull();
		const content = csv('pnezd-no-header.csv');
		const reading = proposedReading(content, { columns: { name: 0, northing: 1, easting: 2, height: 3, code: 4 } });
		await storeControl(server, fresh.surveyor, content, { reading });
		expect(await orderOf()).toBe('PNEZD');
	});

	it('carries map coordinates to the design by the newest model, and refuses where it says nothing of the map', async () => {
		const fresh = await aSite(server);
		const content = demo('control-map.csv');
		const store = () => storeControl(server, fresh.surveyor, content, { frame: 'map' });
		await expect(store()).rejects.toMatchObject({ code: 'REFUSED', data: { code: 'no-model' } });
		const { engineer, siteId } = fresh;
		const plain = readFileSync(new URL('../../fixtures/ifc/hostile/plain-ok.ifc', import.meta.url));
		const first = await readModel(server, engineer, 'wall.ifc', plain, { newName: 'Structure' });
		await expect(store()).rejects.toMatchObject({ code: 'REFUSED', data: { code: 'no-map-conversion' } });
		const { modelId } = first.revision;
		const { end } = await readModel(server, engineer, 'pump-house.ifc', demo('pump-house.ifc'), { modelId });
		expect(end.state).toBe('done');
		const { controlSetId } = await store();
		const { points } = await fresh.surveyor.api.control.get({ siteId, controlSetId });
		for (const { name, givenM, designM } of points) {
			const [x, y, z] = designM as [number, number, number];
			const back = designToMap([x, y, z]);
			for (const axis of [0, 1, 2] as const) expect(back[axis], name).toBeCloseTo(givenM[axis]!, 6);
		}
	});

	it('hides another site’s control', async () => {
		const [one, other] = [await aSite(server), await aSite(server)];
		const { controlSetId } = await storeControl(server, one.surveyor, csv('plain.csv'));
		const { api, siteId } = other.surveyor;
		await expect(api.control.get({ siteId, controlSetId })).rejects.toMatchObject({ code: 'NOT_FOUND' });
		await expect(api.control.get({ siteId: one.siteId, controlSetId })).rejects.toMatchObject({ code: 'NOT_FOUND' });
		await expect(one.engineer.api.control.store(await anInput(one))).rejects.toMatchObject({ code: 'FORBIDDEN' });
		expect(await server.platform.db.select().from(controlPoints).where(eq(controlPoints.siteId, siteId))).toEqual([]);
	});
});

async function anInput(built: BuiltSite) {
	const content = csv('plain.csv');
	const uploadId = await uploadFile(server, built.engineer, 'control.csv', content);
	return {
		siteId: built.siteId,
		uploadId,
		name: 'Control',
		frame: 'design' as const,
		reading: proposedReading(content),
		defaultSigmaM: null,
	};
}
