import { and, eq } from 'drizzle-orm';
import type { Transaction } from '../../db/database.ts';
import { companies } from '../../db/schema/site.ts';
import { isUniqueViolation } from '../../db/unique-violation.ts';
import { audit } from '../../platform/audit.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { foundOne, Refused } from '../../platform/refuse.ts';

/** Another firm on the site. REFUSED where one has the name already. */
export async function addCompany(tx: Transaction, { newId }: Pick<Platform, 'newId'>, member: Member, name: string): Promise<string> {
	const companyId = newId();
	await named(() => tx.insert(companies).values({ id: companyId, siteId: member.siteId, name }));
	await audit(tx, member, { kind: 'company-added', subjectId: companyId, data: { name } });
	return companyId;
}

/** The firm's name; sealed things keep the name they were sealed with. */
export async function renameCompany(tx: Transaction, member: Member, companyId: string, name: string): Promise<void> {
	const mine = and(eq(companies.siteId, member.siteId), eq(companies.id, companyId));
	const { name: before } = foundOne(await tx.select({ name: companies.name }).from(companies).where(mine).for('update'));
	await named(() => tx.update(companies).set({ name }).where(mine));
	await audit(tx, member, { kind: 'company-renamed', subjectId: companyId, data: { before, after: name } });
}

async function named(write: () => Promise<unknown>): Promise<void> {
	try {
		await write();
	} catch (error) {
		if (isUniqueViolation(error, 'companies_name'))
			throw new Refused('name-taken', 'A company of this name is on the site already.', 'name');
		throw error;
	}
}
