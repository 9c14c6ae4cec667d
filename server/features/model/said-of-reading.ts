import { and, asc, count, desc, eq, isNull, or } from 'drizzle-orm';
import type { SaidOfReading } from '#shared/model/choices-contract.ts';
import { isReadAnew, mapScaleReading, type ReadingChoices } from '#shared/model/reading-choices.ts';
import type { Handle } from '../../db/database.ts';
import { users } from '../../db/schema/account.ts';
import { knownElements, models, pickedAxes, readingChosen, revisions } from '../../db/schema/model.ts';
import { foundOne } from '../../platform/refuse.ts';
import { siteSettingsOf } from '../../platform/site-settings.ts';

type Model = typeof models.$inferSelect;

/** A model of the site; NOT_FOUND for another's. */
export async function modelOf(db: Handle, siteId: string, modelId: string): Promise<Model> {
	return foundOne(
		await db
			.select()
			.from(models)
			.where(and(eq(models.siteId, siteId), eq(models.id, modelId))),
	);
}

/** The model's newest revision in whatever state, and the newest that is read. */
export async function newestOf(db: Handle, modelId: string) {
	const rows = await db.select().from(revisions).where(eq(revisions.modelId, modelId)).orderBy(desc(revisions.number)).limit(50);
	return { newest: rows[0] ?? null, ready: rows.find(({ state }) => state === 'ready') ?? null };
}

/** Axes of the model's building; of the model alone where it is of none. */
function axesOf(db: Handle, { siteId, id, buildingId }: Model) {
	const ofBuilding = buildingId === null ? undefined : eq(pickedAxes.buildingId, buildingId);
	return db
		.select({ axis: pickedAxes, by: users.name })
		.from(pickedAxes)
		.innerJoin(users, eq(users.id, pickedAxes.pickedBy))
		.where(and(eq(pickedAxes.siteId, siteId), or(ofBuilding, and(eq(pickedAxes.modelId, id), isNull(pickedAxes.buildingId)))))
		.orderBy(asc(pickedAxes.pickedAt), asc(pickedAxes.id));
}

async function chosenOf(db: Handle, modelId: string) {
	const rows = await db
		.select({ chosen: readingChosen, by: users.name })
		.from(readingChosen)
		.innerJoin(users, eq(users.id, readingChosen.chosenBy))
		.where(eq(readingChosen.modelId, modelId));
	const one = (subject: 'unit' | 'map-scale') => {
		const row = rows.find(({ chosen }) => chosen.subject === subject);
		return row === undefined ? null : { choice: row.chosen.choice, reason: row.chosen.reason, by: row.by, at: row.chosen.chosenAt };
	};
	return { unit: one('unit'), mapScale: one('map-scale') };
}

/** What a reading of the model that begins now goes by. */
export async function choicesFor(db: Handle, siteId: string, modelId: string): Promise<ReadingChoices> {
	const model = await modelOf(db, siteId, modelId);
	const { settings } = await siteSettingsOf(db, siteId);
	const { unit, mapScale } = await chosenOf(db, modelId);
	const axes = await axesOf(db, model);
	const known = await db.select().from(knownElements).where(eq(knownElements.modelId, modelId));
	return {
		placing: settings.checkpoints,
		metresPerUnit: unit === null ? null : Number(unit.choice),
		mapScale: mapScale === null ? null : mapScaleReading.parse(mapScale.choice),
		axes: axes.map(({ axis }) => ({ tag: axis.tag, from: [axis.fromXM, axis.fromYM], to: [axis.toXM, axis.toYM] })),
		knownAs: Object.fromEntries(known.map(({ globalId, knownAs }) => [globalId, knownAs])),
	};
}

/** The same with who said it, and whether reading again would change anything. */
export async function saidOfReadingOf(db: Handle, siteId: string, modelId: string): Promise<SaidOfReading> {
	const model = await modelOf(db, siteId, modelId);
	const { unit, mapScale } = await chosenOf(db, modelId);
	const axes = await axesOf(db, model);
	const [known] = await db.select({ count: count() }).from(knownElements).where(eq(knownElements.modelId, modelId));
	const { ready } = await newestOf(db, modelId);
	return {
		unit: unit && { metresPerUnit: Number(unit.choice), reason: unit.reason, by: unit.by, at: unit.at },
		mapScale: mapScale && { ...mapScale, choice: mapScaleReading.parse(mapScale.choice) },
		axes: axes.map(({ axis, by }) => ({
			axisId: axis.id,
			tag: axis.tag,
			from: [axis.fromXM, axis.fromYM],
			to: [axis.toXM, axis.toYM],
			by,
			at: axis.pickedAt,
		})),
		knownElements: known?.count ?? 0,
		isReadAnew: ready?.reading == null ? null : isReadAnew(ready.reading.choices, await choicesFor(db, siteId, modelId)),
	};
}
