import { and, eq, inArray, sql } from 'drizzle-orm';
import { type NamedElement, whyNotNamed } from '#shared/model/mark-rules.ts';
import type { Transaction } from '../../db/database.ts';
import { insertRows } from '../../db/insert-rows.ts';
import { checkpoints, elementMarks, elements } from '../../db/schema/model.ts';
import { audit } from '../../platform/audit.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { NotFound, Refused } from '../../platform/refuse.ts';
import { lockNewest } from './newest-revision.ts';

interface Renaming {
	revisionId: string;
	marks: readonly { elementId: string; mark: string }[];
}

/**
 * Gives elements of the newest revision other names, their checkpoints with them, and keeps the names for later revisions by GlobalId.
 * All or none. Refused: an element twice, a name that would stand for two or leaves no room for its checkpoints' parts, an element whose
 * GlobalId is missing or stands twice. `where` of a refusal is the place in `marks`.
 */
export async function renameMarks(platform: Platform, member: Member, { revisionId, marks }: Renaming): Promise<{ changed: number }> {
	const wanted = new Map(marks.map(({ elementId, mark }) => [elementId, mark]));
	const whereOf = (elementId: string): string => `marks.${marks.findIndex((one) => one.elementId === elementId)}.mark`;
	if (wanted.size < marks.length) throw new Refused('element-twice', 'One element is given two names.', 'marks');
	return platform.transaction(async (tx) => {
		const { modelId, siteId } = await lockNewest(tx, member.siteId, revisionId);
		const named = await namesOf(tx, revisionId);
		const uses = new Map<string, number>();
		for (const { globalId } of named) uses.set(globalId, (uses.get(globalId) ?? 0) + 1);
		const changed = named.filter(({ elementId, mark }) => wanted.has(elementId) && wanted.get(elementId) !== mark);
		if (named.filter(({ elementId }) => wanted.has(elementId)).length < wanted.size)
			throw new NotFound('One of these elements is not in this revision.');
		for (const { elementId, globalId, mark } of changed) {
			if (globalId !== '' && uses.get(globalId) === 1) continue;
			const why = globalId === '' ? 'has no GlobalId' : 'shares its GlobalId with another';
			throw new Refused('no-stable-id', `${mark} ${why} in the file, so that no later revision would know its name.`, whereOf(elementId));
		}
		const why = whyNotNamed(named, wanted);
		if (why !== null) throw new Refused('mark-not-possible', why.message, whereOf(why.elementId));
		if (changed.length === 0) return { changed: 0 };
		const globalIds = changed.map(({ globalId }) => globalId);
		await rewrite(
			tx,
			changed.map(({ elementId, mark }) => ({ elementId, before: mark, after: wanted.get(elementId)! })),
		);
		await tx.delete(elementMarks).where(and(eq(elementMarks.modelId, modelId), inArray(elementMarks.globalId, globalIds)));
		const said = { siteId, modelId, renamedBy: member.userId, renamedAt: platform.now() };
		await insertRows(
			tx,
			elementMarks,
			changed.map(({ elementId, globalId }) => ({ ...said, globalId, mark: wanted.get(elementId)! })),
		);
		const data = {
			modelId,
			count: changed.length,
			marks: changed.slice(0, 200).map(({ elementId, mark }) => [mark, wanted.get(elementId)]),
		};
		await audit(tx, member, { kind: 'marks-renamed', subjectId: revisionId, data });
		return { changed: changed.length };
	});
}

async function namesOf(tx: Transaction, revisionId: string): Promise<(NamedElement & { globalId: string })[]> {
	const rows = await tx
		.select({ elementId: elements.id, globalId: elements.globalId, mark: elements.mark })
		.from(elements)
		.where(eq(elements.revisionId, revisionId));
	const placed = await tx
		.select({ elementId: checkpoints.elementId, mark: checkpoints.mark })
		.from(checkpoints)
		.where(eq(checkpoints.revisionId, revisionId));
	const marksOf = new Map<string, string[]>();
	for (const { elementId, mark } of placed) {
		const own = marksOf.get(elementId);
		if (own) own.push(mark);
		else marksOf.set(elementId, [mark]);
	}
	return rows.map((row) => ({ ...row, checkpointMarks: marksOf.get(row.elementId) ?? [] }));
}

/** Two statements, however many names. */
async function rewrite(tx: Transaction, changes: readonly { elementId: string; before: string; after: string }[]): Promise<void> {
	const column = (key: 'elementId' | 'before' | 'after') => sql`${sql.param(changes.map((change) => change[key]))}::text[]`;
	const rows = sql`unnest(${column('elementId')}, ${column('before')}, ${column('after')}) as renamed(element_id, before, after)`;
	await tx.execute(sql`update ${elements} set mark = renamed.after from ${rows} where ${elements}.id = renamed.element_id::uuid`);
	await tx.execute(
		sql`update ${checkpoints} set mark = renamed.after || substr(${checkpoints}.mark, char_length(renamed.before) + 1) from ${rows} where ${checkpoints}.element_id = renamed.element_id::uuid and starts_with(${checkpoints}.mark, renamed.before || '.')`,
	);
}
