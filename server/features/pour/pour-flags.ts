import { and, asc, desc, eq, inArray, ne } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import type { PourFlag } from '#shared/pour/readiness.ts';
import type { RecordedFlag } from '#shared/record/sealed-record.ts';
import type { Handle } from '../../db/database.ts';
import { users } from '../../db/schema/account.ts';
import { flagDecisions, flags } from '../../db/schema/flag.ts';
import type { PourModel } from './pour-design.ts';

export interface PourFlags {
	/** Those that have not lapsed. */
	alive: PourFlag[];
	recorded: RecordedFlag[];
}

const decider = alias(users, 'decider');
const consenter = alias(users, 'consenter');

/** The flags on a pour's elements, with what each came to and who accepted what is off. */
export async function pourFlags(db: Handle, siteId: string, models: readonly PourModel[]): Promise<PourFlags> {
	const found: PourFlags = { alive: [], recorded: [] };
	for (const { modelId, elements } of models) {
		if (elements.size === 0) continue;
		const rows = await db
			.select()
			.from(flags)
			.where(
				and(eq(flags.siteId, siteId), eq(flags.modelId, modelId), inArray(flags.globalId, [...elements.keys()]), ne(flags.state, 'lapsed')),
			)
			.orderBy(asc(flags.number));
		const decisions =
			rows.length === 0
				? []
				: await db
						.select({ decision: flagDecisions, decidedBy: decider.name, consentBy: consenter.name })
						.from(flagDecisions)
						.innerJoin(decider, eq(decider.id, flagDecisions.decidedBy))
						.leftJoin(consenter, eq(consenter.id, flagDecisions.consentBy))
						.where(
							inArray(
								flagDecisions.flagId,
								rows.map(({ id }) => id),
							),
						)
						.orderBy(desc(flagDecisions.decidedAt));
		for (const flag of rows) {
			found.alive.push({ modelId, globalId: flag.globalId, kind: flag.kind, state: flag.state });
			const last = decisions.find(({ decision }) => decision.flagId === flag.id);
			const isConceded = flag.closedOn === 'concession' && last?.decision.decision.kind === 'concession';
			found.recorded.push({
				flagId: flag.id,
				modelId,
				globalId: flag.globalId,
				mark: flag.title || flag.mark,
				characteristic: flag.kind,
				state: flag.state,
				outcome: outcomeWords(flag),
				concession:
					isConceded && last.decision.decision.kind === 'concession'
						? {
								upToMm: last.decision.decision.limits.upToMm,
								reason: last.decision.decision.reason,
								conditions: last.decision.decision.conditions,
								decidedBy: last.decidedBy,
								consentBy: last.consentBy,
							}
						: null,
			});
		}
	}
	return found;
}

function outcomeWords({ state, closedOn }: typeof flags.$inferSelect): string {
	if (state !== 'closed') return state === 'put-right' ? 'put right, to be measured' : state;
	if (closedOn === 'concession') return 'closed on a concession';
	return closedOn === 'taken-as-measured' ? 'closed, taken as measured' : 'closed by a later check that is within';
}
