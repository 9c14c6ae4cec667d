import { readFileSync } from 'node:fs';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import type { StoredCheckpoint, StoredElement } from '#shared/model/contract.ts';
import { pourElements } from '../../server/db/schema/pour.ts';
import { auditEntries } from '../../server/db/schema/record.ts';
import { aSite, type BuiltSite } from '../builders/a-site.ts';
import { followJob } from '../builders/follow-job.ts';
import { readInProcess } from '../builders/read-in-process.ts';
import { readModel } from '../builders/read-model.ts';
import { openTestServer, type TestServer } from './harness.ts';

// Not what is tried here, and seconds a time: the process of its own.
vi.mock('../../server/features/model/read-ifc-in-child.ts', () => ({ readIfcInChild: readInProcess }));

/** What people say of how a model is read: density, unit, map scale, axes, elements known as before. Each takes the next reading. */
let server: TestServer;
let site: BuiltSite;
/** One model for most of it, revision after revision: a reading costs seconds. */
let first: { modelId: string; revisionId: string };

const file = readFileSync(new URL('../../fixtures/ifc/made-frame-mm-ifc4x3.ifc', import.meta.url), 'utf8');

beforeAll(async () => {
	server = await openTestServer();
	site = await aSite(server);
	first = await read('Frame', file);
}, 120_000);
afterAll(() => server.close());

const read = async (name: string, content: string, model: { modelId: string } | { newName: string } = { newName: name }) =>
	(await readModel(server, site.engineer, `${name}.ifc`, content, model)).revision;

async function seen(revisionId: string): Promise<{ elements: StoredElement[]; checkpoints: StoredCheckpoint[] }> {
	const asked = { siteId: site.siteId, revisionId };
	return { elements: await site.observer.api.model.elements(asked), checkpoints: await site.observer.api.model.checkpoints(asked) };
}
const readingOf = async (revisionId: string) => (await site.observer.api.model.revision({ siteId: site.siteId, revisionId })).reading;

/** Ends the reading that was begun. */
async function ended({ revisionId, jobId }: { revisionId: string; jobId: string }): Promise<string> {
	expect(await followJob(site.engineer.api, site.siteId, jobId)).toMatchObject({ state: 'done' });
	return revisionId;
}
const again = async (modelId: string) => ended(await site.engineer.api.model.readAgain({ siteId: site.siteId, modelId }));

async function auditOf(kind: string) {
	const rows = await server.platform.db.select().from(auditEntries).where(eq(auditEntries.siteId, site.siteId));
	return rows.filter((row) => row.kind === kind).map(({ data }) => data);
}

async function setPlacing(change: object): Promise<void> {
	const { settings, version } = await site.engineer.api.site.settings({ siteId: site.siteId });
	await site.engineer.api.site.saveSettings({
		siteId: site.siteId,
		settings: { ...settings, checkpoints: { ...settings.checkpoints, ...change } },
		version,
	});
}

describe('density and kinds', { timeout: 120_000 }, () => {
	it('are previewed to the number, take the next reading, and change no id of what stays', async () => {
		const { siteId, engineer } = site;
		const before = await seen(first.revisionId);
		const { settings } = await engineer.api.site.settings({ siteId });
		const placing = { ...settings.checkpoints, faceSpacingM: 0.7, kinds: { plan: true, face: true, level: false } };
		const { previewId, jobId } = await engineer.api.model.previewPlacing({ siteId, placing });
		expect((await followJob(engineer.api, siteId, jobId)).state).toBe('done');
		const preview = await engineer.api.model.placingPreview({ siteId, previewId });
		const [model] = preview.models!;
		expect(model).toMatchObject({ name: 'Frame', revision: 1 });
		expect(model!.classes.reduce((sum, one) => sum + one.before, 0)).toBe(before.checkpoints.length);
		expect((await seen(first.revisionId)).checkpoints).toHaveLength(before.checkpoints.length);

		await setPlacing(placing);
		expect(await engineer.api.model.saidOfReading({ siteId, modelId: first.modelId })).toMatchObject({ isReadAnew: true });
		const second = await again(first.modelId);
		expect(await engineer.api.model.saidOfReading({ siteId, modelId: first.modelId })).toMatchObject({ isReadAnew: false });
		const after = await seen(second);
		expect(after.checkpoints).toHaveLength(model!.classes.reduce((sum, one) => sum + one.after, 0));
		expect(after.checkpoints.some(({ characteristic }) => characteristic === 'level')).toBe(false);
		const faces = (of: StoredCheckpoint[]) => of.filter(({ characteristic }) => characteristic === 'face');
		expect(faces(after.checkpoints).length).toBeGreaterThan(1.2 * faces(before.checkpoints).length);
		const plans = (of: StoredCheckpoint[]) =>
			of.filter(({ characteristic }) => characteristic === 'plan').map(({ id, mark }) => [id, mark]);
		expect(plans(after.checkpoints)).toEqual(plans(before.checkpoints));

		await setPlacing(settings.checkpoints);
		expect(await auditOf('model-read-again')).toHaveLength(1);
	});
});

describe('two readings of a unit or a scale', { timeout: 120_000 }, () => {
	it('of the unit: the chosen one of those the file names holds, with its reason, on the record', async () => {
		const { siteId, engineer } = site;
		const twice = file
			.replace(
				'#10=IFCUNITASSIGNMENT((#6,#7,#8,#9));',
				'#10=IFCUNITASSIGNMENT((#6,#99999,#7,#8,#9));\n#99999=IFCSIUNIT(*,.LENGTHUNIT.,.CENTI.,.METRE.);',
			)
			.replace(/#18=IFCMAPCONVERSION[^;]*;/, '');
		const { modelId, revisionId } = await read('Twice', twice);
		const before = await readingOf(revisionId);
		expect(before.metresPerUnit).toBe(0.001);
		expect(before.findings.find(({ code }) => code === 'unit-contradiction')!.message).toContain('The first is used');
		const choose = (metresPerUnit: number | null) =>
			engineer.api.model.chooseReading({
				siteId,
				modelId,
				choice: { subject: 'unit', metresPerUnit },
				reason: 'Measured door: 2.10 m.',
			});
		await expect(choose(0.3048)).rejects.toMatchObject({
			code: 'REFUSED',
			data: { code: 'not-one-of-them' },
			message: expect.stringContaining('centimetre'),
		});
		expect(await choose(0.01)).toMatchObject({
			unit: { metresPerUnit: 0.01, by: engineer.name, reason: 'Measured door: 2.10 m.' },
			isReadAnew: true,
		});
		await choose(null);
		expect(await auditOf('reading-chosen')).toEqual([
			{ subject: 'unit', before: null, after: '0.01', reason: 'Measured door: 2.10 m.' },
			{ subject: 'unit', before: '0.01', after: null, reason: 'Measured door: 2.10 m.' },
		]);
	});

	it('of the unit where the file names none: refused, then read in the chosen one', async () => {
		const { siteId, engineer } = site;
		const none = file
			.replace('#10=IFCUNITASSIGNMENT((#6,#7,#8,#9));', '#10=IFCUNITASSIGNMENT((#7,#8,#9));')
			.replace(/#6=IFCSIUNIT[^;]*;/, '');
		const { modelId, state, reason } = await read('Unitless', none);
		expect([state, reason]).toEqual(['failed', expect.stringContaining('does not say its length unit')]);
		await engineer.api.model.chooseReading({
			siteId,
			modelId,
			choice: { subject: 'unit', metresPerUnit: 0.001 },
			reason: 'Known from the drawings.',
		});
		const reading = await readingOf(await again(modelId));
		expect(reading).toMatchObject({ metresPerUnit: 0.001 });
		expect(reading.findings.map(({ code }) => code)).toContain('unit-chosen');
	});

	it('of the map scale: control and field lists go by the chosen one', async () => {
		const { siteId, engineer, observer } = site;
		const bare = file.replace(',0.305058636443443,0.00099962)', ',0.305058636443443,$)');
		const { modelId, revisionId } = await read('Scale', bare);
		const list = (of: string) => observer.api.model.fieldCsv({ siteId, revisionId: of, frame: 'map', storey: null });
		await expect(list(revisionId)).rejects.toMatchObject({ code: 'REFUSED' });
		const choose = (reading: 'as-written' | 'by-units') =>
			engineer.api.model.chooseReading({ siteId, modelId, choice: { subject: 'map-scale', reading }, reason: 'Two marks were measured.' });
		await choose('by-units');
		const second = await again(modelId);
		const reading = await readingOf(second);
		expect(reading.mapConversion).toMatchObject({ scale: 0.001, chosenScale: 'by-units' });
		expect(reading.findings.find(({ code }) => code === 'map-scale')!.message).toContain('1 m in the model is 1 m on the map');
		const [, row] = (await (await list(second)).text()).split('\n');
		expect(Number(row!.split(',')[1])).toBeGreaterThan(392_000);
		expect(Number(row!.split(',')[1])).toBeLessThan(393_000);
	});

	it('is not asked where there is one reading, nor of another site’s model', async () => {
		const { siteId, engineer } = site;
		const { modelId } = first;
		for (const choice of [
			{ subject: 'unit', metresPerUnit: 1 },
			{ subject: 'map-scale', reading: 'by-units' },
		] as const)
			await expect(engineer.api.model.chooseReading({ siteId, modelId, choice, reason: 'So.' })).rejects.toMatchObject({
				data: { code: 'nothing-to-choose' },
			});
		const other = await aSite(server);
		await expect(other.engineer.api.model.readAgain({ siteId: other.siteId, modelId })).rejects.toMatchObject({ code: 'NOT_FOUND' });
		await expect(other.engineer.api.model.saidOfReading({ siteId: other.siteId, modelId })).rejects.toMatchObject({ code: 'NOT_FOUND' });
	});
});

describe('axes by two picks', { timeout: 120_000 }, () => {
	it('stand in for a grid that the file does not have, and marks are made of them', async () => {
		const { siteId, engineer, surveyor } = site;
		const { modelId, revisionId } = first;
		expect((await readingOf(revisionId)).grid).toEqual([]);
		const column = (elements: StoredElement[], tag: string) => elements.find((element) => element.tag === tag)!;
		const before = await seen(revisionId);
		const middle = (tag: string): [number, number] => {
			const { min, max } = column(before.elements, tag).boxM!;
			return [(min[0] + max[0]) / 2, (min[1] + max[1]) / 2];
		};
		const name = (tag: string, from: [number, number], to: [number, number]) =>
			surveyor.api.model.nameAxis({ siteId, modelId, tag, from, to });
		await name('A', middle('C-A1'), middle('C-A2'));
		await name('B', middle('C-B1'), middle('C-B2'));
		await name('1', middle('C-A1'), middle('C-B1'));
		await name('2', middle('C-A2'), middle('C-B2'));
		await expect(name('b', middle('C-A1'), middle('C-B2'))).rejects.toMatchObject({ data: { code: 'tag-taken' } });
		await expect(name('X', [0, 0], [0, 0.1])).rejects.toMatchObject({ data: { code: 'too-near' } });
		await expect(name('12345', [0, 0], [9, 9])).rejects.toMatchObject({ code: 'BAD_REQUEST' });
		const { axes } = await name('Y', [0, 0], [9, 9]);
		await surveyor.api.model.removeAxis({ siteId, modelId, axisId: axes.at(-1)!.axisId });
		await expect(engineer.api.model.removeAxis({ siteId, modelId, axisId: axes.at(-1)!.axisId })).rejects.toMatchObject({
			code: 'NOT_FOUND',
		});
		const after = await seen(await again(modelId));
		expect(column(after.elements, 'C-B2').title).toContain('Column B/2');
		expect(column(after.elements, 'C-A1').title).toContain('Column A/1');
		expect(after.checkpoints.map(({ id }) => id)).toEqual(before.checkpoints.map(({ id }) => id));
		expect((await auditOf('axis-named')).length).toBe(5);
	});
});

describe('renewed GlobalIds', { timeout: 120_000 }, () => {
	it('are proposed in bulk, accepted once, and then names, choices, own checkpoints, pours and ids keep', async () => {
		const { siteId, engineer, surveyor } = site;
		const { modelId } = first;
		const newest = (await engineer.api.model.list({ siteId })).find((one) => one.modelId === modelId)!.revisions[0]!;
		const { revisionId } = newest;
		const before = await seen(revisionId);
		const element = before.elements.find(({ tag }) => tag === 'C-B2')!;
		const own = before.checkpoints.filter(({ elementId }) => elementId === element.elementId);
		await engineer.api.model.renameMarks({ siteId, revisionId, marks: [{ elementId: element.elementId, mark: 'RIVER 2' }] });
		await surveyor.api.model.chooseCheckpoints({
			siteId,
			revisionId,
			checkpointIds: [own[0]!.id],
			requirement: 'left-out',
			reason: 'Hidden.',
		});
		const face = own.find(({ characteristic }) => characteristic === 'face')!;
		const { checkpointId } = await surveyor.api.model.addCheckpoint({
			siteId,
			revisionId,
			elementId: element.elementId,
			place: [face.place[0], face.place[1], face.place[2] + 0.05],
			normal: face.direction!,
			label: 'Jamb',
			reason: 'Asked.',
		});
		const columns = before.elements.filter((one) => one.class === element.class && one.storey === element.storey);
		const { pourId, elementCount } = await engineer.api.pour.add({
			siteId,
			pour: {
				number: '7',
				name: 'Columns',
				companyId: site.companyId,
				plannedAt: null,
				modelId,
				elements: [{ storey: element.storey, class: element.class }],
			},
		});
		expect(elementCount).toBe(columns.length);
		/** The tags of the pour's elements that a revision has. */
		const pouredOf = async (elements: readonly StoredElement[]) => {
			const rows = await server.platform.db.select().from(pourElements).where(eq(pourElements.pourId, pourId));
			expect(rows).toHaveLength(elementCount);
			const poured = new Set(rows.map(({ globalId }) => globalId));
			return elements.filter(({ globalId }) => poured.has(globalId)).map(({ tag }) => tag);
		};
		// Every element's GlobalId anew.
		const renewed = file.replace(
			/(=IFC(?:COLUMN|WALL|SLAB|BEAM|FOOTING|MECHANICALFASTENER|PILE|PLATE|DISCRETEACCESSORY)\(')([^']{22})'/g,
			(_all, head: string, id: string) =>
				`${head}${[...id]
					.reverse()
					.join('')
					.replace(/^[^0-3]/, '1')}'`,
		);
		const next = await read('Frame', renewed, { modelId });
		const stranger = await seen(next.revisionId);
		expect(stranger.elements.find(({ tag }) => tag === 'C-B2')!.mark).not.toBe('RIVER 2');
		expect(await pouredOf(stranger.elements)).toEqual([]);
		const proposed = await site.observer.api.model.sameElements({ siteId, revisionId: next.revisionId });
		const ofB2 = proposed.find(({ knownAs }) => knownAs === element.globalId)!;
		expect(ofB2.markBefore).toBe('RIVER 2');
		const ask = (count: number) => engineer.api.model.acceptSame({ siteId, revisionId: next.revisionId, count });
		await expect(ask(proposed.length + 1)).rejects.toMatchObject({ code: 'CONFLICT' });
		const after = await seen(await ended(await ask(proposed.length)));
		const kept = after.elements.find(({ tag }) => tag === 'C-B2')!;
		expect(kept).toMatchObject({ mark: 'RIVER 2', globalId: element.globalId, fileGlobalId: ofB2.globalId });
		expect(after.checkpoints.map(({ id }) => id)).toEqual(
			expect.arrayContaining([...before.checkpoints.map(({ id }) => id), checkpointId]),
		);
		expect(after.checkpoints.find(({ id }) => id === own[0]!.id)).toMatchObject({ requirement: 'left-out' });
		expect(after.checkpoints.find(({ id }) => id === checkpointId)!.mark).toBe('RIVER 2.X1');
		expect((await pouredOf(after.elements)).sort()).toEqual(columns.map(({ tag }) => tag).sort());
		await expect(ask(proposed.length)).rejects.toMatchObject({ data: { code: 'not-newest' } });
		expect(await auditOf('elements-known-as')).toHaveLength(1);
	});
});
