import { and, desc, eq, inArray, or, sql } from 'drizzle-orm';
import { type MarkMatch, matchMarks } from '#shared/survey/match-marks.ts';
import type { Handle } from '../../db/database.ts';
import { controlPoints, controlSets } from '../../db/schema/control.ts';
import { surveyPoints } from '../../db/schema/survey.ts';

/** Names of the site's newest control set; none where it has none. */
export async function newestMarks(db: Handle, siteId: string): Promise<string[]> {
	const [newest] = await db
		.select({ id: controlSets.id })
		.from(controlSets)
		.where(eq(controlSets.siteId, siteId))
		.orderBy(desc(controlSets.number))
		.limit(1);
	if (newest === undefined) return [];
	const rows = await db.select({ name: controlPoints.name }).from(controlPoints).where(eq(controlPoints.controlSetId, newest.id));
	return rows.map(({ name }) => name);
}

/** Per set-up which names mean one of the marks, and which. The database sorts out the few names that can; the rule is `matchMarks`. */
export async function targetNames(
	db: Handle,
	surveyIds: readonly string[],
	marks: readonly string[],
): Promise<Map<string, Map<string, MarkMatch>>> {
	if (marks.length === 0 || surveyIds.length === 0) return new Map();
	const bare = sql`regexp_replace(lower(${surveyPoints.name}), '[[:space:]_./-]+', '', 'g')`;
	const bareMarks = marks.map((mark) => mark.toLowerCase().replace(/[\s\-_./]+/g, ''));
	const candidates = await db
		.selectDistinct({ setupId: surveyPoints.setupId, name: surveyPoints.name })
		.from(surveyPoints)
		.where(and(inArray(surveyPoints.surveyId, [...surveyIds]), or(inArray(surveyPoints.name, [...marks]), inArray(bare, bareMarks))));
	const names = new Map<string, string[]>();
	for (const { setupId, name } of candidates) names.set(setupId, [...(names.get(setupId) ?? []), name]);
	return new Map([...names].map(([setupId, own]) => [setupId, matchMarks(own, marks)]));
}
