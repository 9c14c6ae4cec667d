import { readFile } from 'node:fs/promises';
import type { InferContractRouterInputs } from '@orpc/contract';
import { and, desc, eq, max } from 'drizzle-orm';
import type { ControlSetSummary, controlContract } from '#shared/control/contract.ts';
import { type MapFrame, mapFrameOf, mapScaleFinding } from '#shared/control/map-frame.ts';
import { pointTableLimits } from '#shared/survey/table-bytes.ts';
import type { Handle, Transaction } from '../../db/database.ts';
import { insertRows } from '../../db/insert-rows.ts';
import { lockSite } from '../../db/lock-site.ts';
import { controlPoints, controlSets } from '../../db/schema/control.ts';
import { revisions } from '../../db/schema/model.ts';
import { audit } from '../../platform/audit.ts';
import { keepUpload } from '../../platform/keep-upload.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { Refused } from '../../platform/refuse.ts';
import { takeUpload, useUpload } from '../../platform/uploads.ts';
import { controlSetOf } from './queries.ts';
import { type ControlReading, readControl } from './read-control.ts';

type StoreControl = InferContractRouterInputs<typeof controlContract>['store'];

/**
 * Reads an uploaded list of control points as it was said to be read and stores it as the site's next control set: all rows or none. With
 * any fault the faults are answered, and the upload may be tried again. `besides` writes into the same transaction.
 */
export async function storeControl(
	platform: Platform,
	member: Member,
	{ uploadId, name, frame, reading, defaultSigmaM }: StoreControl,
	besides: (tx: Transaction) => Promise<void>,
): Promise<{ ok: true; set: ControlSetSummary } | ({ ok: false } & ControlReading)> {
	const { siteId } = member;
	const upload = await takeUpload(platform, member, uploadId);
	if (upload.bytes > pointTableLimits.bytes) {
		throw new Refused(
			'too-large',
			`A control list has at most ${pointTableLimits.bytes / 1024 / 1024} MB; this file has more.`,
			'uploadId',
		);
	}
	const mapFrame = frame === 'map' ? await newestMapFrame(platform.db, siteId) : null;
	const read = readControl(await readFile(upload.path), reading, mapFrame, defaultSigmaM);
	if (read.faultCount > 0) return { ok: false, ...read };
	const kept = await keepUpload(platform, upload);
	const controlSetId = platform.newId();
	const now = platform.now();
	await platform.transaction(async (tx) => {
		await lockSite(tx, siteId);
		await useUpload(tx, uploadId, kept, now);
		const [row] = await tx
			.select({ highest: max(controlSets.number) })
			.from(controlSets)
			.where(eq(controlSets.siteId, siteId));
		const number = (row?.highest ?? 0) + 1;
		await tx.insert(controlSets).values({
			id: controlSetId,
			siteId,
			number,
			name,
			frame,
			fileName: upload.fileName,
			fileSha256: kept.sha256,
			reading,
			storedBy: member.userId,
			storedAt: now,
		});
		await insertRows(
			tx,
			controlPoints,
			read.points.map((point) => ({
				id: platform.newId(),
				siteId,
				controlSetId,
				name: point.name,
				code: point.code,
				givenXM: point.givenM[0],
				givenYM: point.givenM[1],
				givenZM: point.givenM[2],
				designXM: point.designM[0],
				designYM: point.designM[1],
				designZM: point.designM[2],
				sigmaPlanM: point.sigmaPlanM,
				sigmaHeightM: point.sigmaHeightM,
				state: 'in-use' as const,
			})),
		);
		await besides(tx);
		const data = { number, name, frame, fileSha256: kept.sha256, points: read.points.length };
		await audit(tx, member, { kind: 'control-stored', subjectId: controlSetId, data });
	});
	return { ok: true, set: await controlSetOf(platform.db, siteId, controlSetId) };
}

/** How the design lies on the map, as the site's newest ready revision says. Refused where none says so, or says it in a way that contradicts itself. */
async function newestMapFrame(db: Handle, siteId: string): Promise<MapFrame> {
	const ready = await db
		.select({ fileName: revisions.fileName, number: revisions.number, reading: revisions.reading })
		.from(revisions)
		.where(and(eq(revisions.siteId, siteId), eq(revisions.state, 'ready')))
		.orderBy(desc(revisions.uploadedAt))
		.limit(1);
	const [newest] = ready;
	if (newest?.reading == null) {
		throw new Refused(
			'no-model',
			'Map coordinates need a model that says how the design lies on the map. Upload the model first.',
			'frame',
		);
	}
	const { mapConversion, metresPerUnit } = newest.reading;
	const model = `${newest.fileName} (revision ${newest.number})`;
	if (mapConversion === null) {
		throw new Refused(
			'no-map-conversion',
			`The newest model, ${model}, has no IfcMapConversion, so nothing tells how the design lies on the map. Give the control in the design frame, or export the model with its map conversion.`,
			'frame',
		);
	}
	const odd = mapScaleFinding(mapConversion, metresPerUnit);
	if (odd !== null) throw new Refused('map-scale', `${odd.message} Until then give the control in the design frame.`, 'frame');
	try {
		return mapFrameOf(mapConversion, metresPerUnit);
	} catch (error) {
		if (!(error instanceof RangeError)) throw error;
		throw new Refused('bad-map-conversion', `The IfcMapConversion of ${model} cannot be used. ${error.message}`, 'frame');
	}
}
