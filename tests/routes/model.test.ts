import { readFileSync } from 'node:fs';
import { eq } from 'drizzle-orm';
import { afterAll, afterEach, beforeAll, describe, expect, it, vi } from 'vitest';
import { checkpoints, elements, revisions } from '../../server/db/schema/model.ts';
import { auditEntries } from '../../server/db/schema/record.ts';
import { aSite, type BuiltSite } from '../builders/a-site.ts';
import { followJob } from '../builders/follow-job.ts';
import { readInProcess } from '../builders/read-in-process.ts';
import { readModel } from '../builders/read-model.ts';
import { uploadFile } from '../builders/upload-file.ts';
import { openTestServer, type TestServer } from './harness.ts';

// The process of its own costs seconds a time: only where it is what is tried.
const child = vi.hoisted(() => ({ isWanted: false }));
vi.mock(import('../../server/features/model/read-ifc-in-child.ts'), async (importOriginal) => {
	const { readIfcInChild } = await importOriginal();
	return { readIfcInChild: (options) => (child.isWanted ? readIfcInChild(options) : readInProcess(options)) };
});

let server: TestServer;
let site: BuiltSite;
beforeAll(async () => {
	server = await openTestServer();
	site = await aSite(server);
});
afterAll(() => server.close());
afterEach(() => {
	child.isWanted = false;
});

const fixture = (name: string) => readFileSync(new URL(`../../fixtures/ifc/${name}`, import.meta.url));

const read = (fileName: string, content: string | Uint8Array, model: { modelId: string } | { newName: string }) =>
	readModel(server, site.engineer, fileName, content, model);

const storedOf = async (revisionId: string) => ({
	elements: await server.platform.db.select({ id: elements.id }).from(elements).where(eq(elements.revisionId, revisionId)),
	checkpoints: await server.platform.db.select({ id: checkpoints.id }).from(checkpoints).where(eq(checkpoints.revisionId, revisionId)),
});

describe('reading a model', { timeout: 180_000 }, () => {
	it.each([
		['IFC2X3', 'made-frame-foot-ifc2x3.ifc'],
		['IFC4', 'made-frame-metre-ifc4.ifc'],
		['IFC4X3', 'made-frame-mm-ifc4x3.ifc'],
	])('stores elements, checkpoints and a picture of a file in %s', async (schema, fileName) => {
		const { end, revision } = await read(fileName, fixture(fileName), { newName: `Frame ${schema}` });
		expect(end).toMatchObject({ state: 'done', kind: 'model.read-ifc', subjectId: revision.revisionId, reason: null });
		expect(revision).toMatchObject({ number: 1, state: 'ready', fileName, uploadedBy: site.engineer.name });
		const { siteId, observer } = site;
		const asked = { siteId, revisionId: revision.revisionId };
		const detail = await observer.api.model.revision(asked);
		expect(detail.reading.schema.startsWith(schema)).toBe(true);
		const readElements = await observer.api.model.elements(asked);
		const readCheckpoints = await observer.api.model.checkpoints(asked);
		expect(revision.elementCount).toBe(readElements.length);
		expect(revision.checkpointCount).toBe(readCheckpoints.length);
		expect(readElements.filter(({ class: ifcClass }) => ifcClass === 'IfcColumn')).toHaveLength(6);
		expect(readCheckpoints.length).toBeGreaterThan(50);
		for (const element of readElements) {
			const own = readCheckpoints.filter(({ elementId }) => elementId === element.elementId);
			expect(own.length, element.mark).toBe(element.checkpointCount);
			expect(own.every(({ globalId, mark }) => globalId === element.globalId && mark.startsWith(element.mark))).toBe(true);
		}
		expect(new Set(readCheckpoints.map(({ mark, characteristic }) => `${mark} ${characteristic}`)).size).toBeGreaterThan(
			readElements.length,
		);
		const picture = await observer.api.model.picture(asked);
		expect(
			Buffer.from(await picture.arrayBuffer())
				.subarray(0, 4)
				.toString('latin1'),
		).toBe('glTF');
	});

	it.each([
		['no IFC at all', 'pdf-renamed.ifc'],
		['a file cut in the middle', 'truncated-half.ifc'],
		['nothing', 'zero-byte.ifc'],
		['random bytes', 'garbage.ifc'],
	])('says why it cannot read %s, and stores nothing of it', async (_, fileName) => {
		const { end, revision } = await read(fileName, fixture(`hostile/${fileName}`), { newName: fileName });
		expect(end.state).toBe('failed');
		expect(end.reason).toMatch(/^\p{Lu}.{20,}\.$/u);
		expect(revision).toMatchObject({ state: 'failed', reason: end.reason, elementCount: 0, checkpointCount: 0 });
		expect(await storedOf(revision.revisionId)).toEqual({ elements: [], checkpoints: [] });
		const asked = site.observer.api.model.revision({ siteId: site.siteId, revisionId: revision.revisionId });
		await expect(asked).rejects.toMatchObject({ code: 'REFUSED', message: end.reason });
	});

	it('lives on when a file breaks the engine or never ends, and keeps the good wall beside it', async () => {
		child.isWanted = true;
		const fileName = 'boolean-second-operand-self.ifc';
		const broken = await read(fileName, fixture(`hostile/${fileName}`), { newName: fileName });
		expect([broken.end.state, broken.revision.elementCount]).toEqual(['done', 2]);
		const { reading } = await site.observer.api.model.revision({ siteId: site.siteId, revisionId: broken.revision.revisionId });
		expect(reading.skipped.some(({ why }) => why.includes('left out'))).toBe(true);
		const { end } = await read('plain-ok.ifc', fixture('hostile/plain-ok.ifc'), { newName: 'After the crash' });
		expect(end.state).toBe('done');
	});

	it('refuses a model without elements', async () => {
		const empty = fixture('hostile/plain-ok.ifc')
			.toString('latin1')
			.replace(/^#\d+\s*=\s*IFCWALL.*$/gim, '');
		const { end, revision } = await read('empty.ifc', Buffer.from(empty, 'latin1'), { newName: 'Empty' });
		expect(end).toMatchObject({ state: 'failed', reason: expect.stringContaining('no building elements') });
		expect(await storedOf(revision.revisionId)).toEqual({ elements: [], checkpoints: [] });
	});

	it('numbers revisions, and refuses the newest one’s bytes as the next', async () => {
		const plain = fixture('hostile/plain-ok.ifc');
		const { revision } = await read('wall.ifc', plain, { newName: 'Wall' });
		const { modelId } = revision;
		const { engineer, siteId } = site;
		const again = await uploadFile(server, engineer, 'wall.ifc', plain);
		await expect(engineer.api.model.read({ siteId, uploadId: again, model: { modelId } })).rejects.toMatchObject({
			code: 'REFUSED',
			data: { code: 'same-file' },
		});
		const changed = Buffer.concat([plain, Buffer.from('\n')]);
		expect((await read('wall.ifc', changed, { modelId })).revision).toMatchObject({ number: 2, state: 'ready' });
		const named = await uploadFile(server, engineer, 'other.ifc', plain);
		await expect(engineer.api.model.read({ siteId, uploadId: named, model: { newName: 'Wall' } })).rejects.toMatchObject({
			code: 'REFUSED',
			data: { code: 'name-taken' },
		});
		const kinds = await server.platform.db
			.select({ kind: auditEntries.kind })
			.from(auditEntries)
			.where(eq(auditEntries.subjectId, revision.revisionId));
		expect(kinds.map(({ kind }) => kind).sort()).toEqual(['model-read', 'model-uploaded']);
	});

	it('takes an upload once, from whoever brought it, also when two ask at the same moment', async () => {
		const { engineer, surveyor, siteId } = site;
		const uploadId = await uploadFile(server, engineer, 'once.ifc', Buffer.concat([fixture('hostile/plain-ok.ifc'), Buffer.from('\n\n')]));
		await expect(surveyor.api.model.read({ siteId, uploadId, model: { newName: 'Stolen' } })).rejects.toMatchObject({ code: 'FORBIDDEN' });
		const other = await server.addMember(siteId, ['project-engineer']);
		await expect(other.api.model.read({ siteId, uploadId, model: { newName: 'Stolen' } })).rejects.toMatchObject({ code: 'NOT_FOUND' });
		const ask = (newName: string) => engineer.api.model.read({ siteId, uploadId, model: { newName } });
		const both = await Promise.allSettled([ask('One'), ask('Other')]);
		expect(both.map(({ status }) => status).sort()).toEqual(['fulfilled', 'rejected']);
		const lost = both.find((one) => one.status === 'rejected');
		expect(['CONFLICT', 'REFUSED']).toContain(lost?.reason.code);
		await expect(ask('Late')).rejects.toMatchObject({ code: 'REFUSED', data: { code: 'upload-used' } });
		const stored = await server.platform.db.select().from(revisions).where(eq(revisions.fileName, 'once.ifc'));
		expect(stored).toHaveLength(1);
	});

	it('lets a person cancel, and calls the revision cancelled', async () => {
		child.isWanted = true;
		const { engineer, siteId } = site;
		const uploadId = await uploadFile(server, engineer, 'slow.ifc', fixture('hostile/boolean-self-hang.ifc'));
		const { revisionId, jobId } = await engineer.api.model.read({ siteId, uploadId, model: { newName: 'Slow' } });
		await engineer.api.job.cancel({ siteId, jobId });
		expect(await followJob(engineer.api, siteId, jobId)).toMatchObject({ state: 'cancelled' });
		const [row] = await server.platform.db.select().from(revisions).where(eq(revisions.id, revisionId));
		expect(row?.state).toBe('cancelled');
		expect(await storedOf(revisionId)).toEqual({ elements: [], checkpoints: [] });
	});

	it('hides another site’s revisions, pictures and jobs', async () => {
		const { revision, jobId } = await read('mine.ifc', Buffer.concat([fixture('hostile/plain-ok.ifc'), Buffer.from(' ')]), {
			newName: 'Mine',
		});
		const elsewhere = await aSite(server);
		const { api, siteId } = elsewhere.engineer;
		const asked = { siteId, revisionId: revision.revisionId };
		for (const call of [
			() => api.model.revision(asked),
			() => api.model.elements(asked),
			() => api.model.checkpoints(asked),
			() => api.model.picture(asked),
			() => api.job.get({ siteId, jobId }),
			() => api.job.cancel({ siteId, jobId }),
			() => api.model.revision({ siteId: site.siteId, revisionId: revision.revisionId }),
		]) {
			await expect(call()).rejects.toMatchObject({ code: 'NOT_FOUND' });
		}
		expect(await api.model.list({ siteId })).toEqual([]);
	});
});
