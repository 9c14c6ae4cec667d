import { eq } from 'drizzle-orm';
import type { Deviation } from '#shared/check/check-schema.ts';
import { checkpointLimits } from '#shared/check/judge-deviation.ts';
import { gridYawRad } from '#shared/model/grid-yaw.ts';
import { matchPreparedRule, prepareRules } from '#shared/tolerance/match-rule.ts';
import type { Stage, ToleranceSheet } from '#shared/tolerance/sheet-schema.ts';
import type { Handle } from '../../db/database.ts';
import { elementOf } from '../../db/model-rows.ts';
import type { elements } from '../../db/schema/model.ts';
import { buildings } from '../../db/schema/site.ts';
import type { PourModel } from './pour-design.ts';

/** Whether the issued sheet gives a checkpoint other limits than those it was judged by. Asked only where the check's sheet is another. */
export async function limitsByIssued(db: Handle, { decision, rules }: ToleranceSheet, model: PourModel) {
	const [building] =
		model.buildingId === null ? [] : await db.select({ name: buildings.name }).from(buildings).where(eq(buildings.id, model.buildingId));
	const prepared = prepareRules(rules);
	const gridYaw = gridYawRad(model.revision.reading?.grid ?? []);
	return (row: typeof elements.$inferSelect, deviation: Deviation, stage: Stage, judgedBy: ToleranceSheet['decision']): boolean => {
		const { sizesM, ...element } = elementOf(row);
		const matched = matchPreparedRule(prepared, {
			class: element.class,
			characteristic: deviation.characteristic,
			storey: element.storey,
			building: building?.name ?? null,
			tag: element.tag,
			mark: element.mark,
			stage,
			sizesM,
		});
		const { limitsMm, boxYawRad } = checkpointLimits(matched, sizesM, deviation.characteristic === 'plan', () => gridYaw ?? 0);
		const same = (a: readonly (number | null)[] | null, b: readonly (number | null)[] | null) => JSON.stringify(a) === JSON.stringify(b);
		return !same(limitsMm, deviation.limitsMm) || (boxYawRad ?? null) !== (deviation.boxYawRad ?? null) || decision !== judgedBy;
	};
}
