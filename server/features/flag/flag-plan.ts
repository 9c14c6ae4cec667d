import { and, desc, eq, isNotNull } from 'drizzle-orm';
import type { FlagPlan } from '#shared/flag/contract.ts';
import type { Handle } from '../../db/database.ts';
import { elements, revisions } from '../../db/schema/model.ts';
import type { FlagRow } from './flag-rows.ts';

type PlanBox = FlagPlan['own'];

/** So many of its kind about it say where it stands. */
const mostOthers = 40;

/** The flag's element among those of its class on its storey, in the newest revision that is read. Null where there is no box of it. */
export async function flagPlanOf(db: Handle, { siteId, modelId, globalId }: FlagRow): Promise<FlagPlan | null> {
	const [newest] = await db
		.select({ id: revisions.id })
		.from(revisions)
		.where(and(eq(revisions.siteId, siteId), eq(revisions.modelId, modelId), eq(revisions.state, 'ready')))
		.orderBy(desc(revisions.number))
		.limit(1);
	if (newest === undefined) return null;
	const [own] = await db
		.select({ class: elements.class, storey: elements.storey, boxM: elements.boxM })
		.from(elements)
		.where(and(eq(elements.revisionId, newest.id), eq(elements.globalId, globalId)));
	if (own === undefined || own.boxM === null) return null;
	const rows = await db
		.select({ globalId: elements.globalId, boxM: elements.boxM })
		.from(elements)
		.where(
			and(eq(elements.revisionId, newest.id), eq(elements.class, own.class), eq(elements.storey, own.storey), isNotNull(elements.boxM)),
		);
	const box = planBoxOf(own.boxM);
	const others = rows.flatMap((row) => (row.boxM === null || row.globalId === globalId ? [] : [planBoxOf(row.boxM)]));
	return { own: box, others: others.sort((a, b) => apart(a, box) - apart(b, box)).slice(0, mostOthers) };
}

function planBoxOf(boxM: readonly number[]): PlanBox {
	return [boxM[0] ?? 0, boxM[1] ?? 0, boxM[3] ?? 0, boxM[4] ?? 0];
}

function apart(a: PlanBox, b: PlanBox): number {
	return Math.hypot(a[0] + a[2] - b[0] - b[2], a[1] + a[3] - b[1] - b[3]);
}
