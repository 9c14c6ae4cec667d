import { and, count, eq, gt, isNull, lte, or } from 'drizzle-orm';
import type { z } from 'zod';
import type { factors } from '#shared/account/factors-contract.ts';
import { recoveryCodes, totps } from '../../db/schema/account.ts';
import { memberships, sites } from '../../db/schema/site.ts';
import type { Platform, SignedIn } from '../../platform/platform.ts';
import { passkeysOf, relyingParty } from './passkeys.ts';

/** What stands between the person's account and who knows their password. */
export async function factorsOf({ db, now, publicUrl }: Platform, { userId, proof }: SignedIn): Promise<z.infer<typeof factors>> {
	const [codes] = await db.select({ since: totps.confirmedAt }).from(totps).where(eq(totps.userId, userId));
	const [left] = await db
		.select({ left: count() })
		.from(recoveryCodes)
		.where(and(eq(recoveryCodes.userId, userId), isNull(recoveryCodes.usedAt)));
	const asking = await db
		.selectDistinct({ name: sites.name })
		.from(sites)
		.innerJoin(memberships, eq(memberships.siteId, sites.id))
		.where(
			and(
				eq(sites.needsSecondFactor, true),
				eq(memberships.userId, userId),
				lte(memberships.fromAt, now()),
				or(isNull(memberships.leftAt), gt(memberships.leftAt, now())),
			),
		);
	return {
		codesSince: codes?.since ?? null,
		recoveryCodesLeft: left?.left ?? 0,
		passkeys: await passkeysOf(db, userId),
		passkeyOrigin: relyingParty(publicUrl())?.origin ?? null,
		freshUntil: proof?.freshUntil ?? null,
		hasSecondFactor: proof?.hasSecondFactor ?? false,
		askedBy: asking.map(({ name }) => name),
	};
}
