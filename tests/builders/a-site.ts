import type { TestServer } from '../routes/harness.ts';

/** A site with one person for each role and two companies, the contractor being of the first. */
export async function aSite(server: TestServer) {
	const siteId = await server.addSite();
	const companyId = await server.addCompany(siteId, 'Formwork Ltd');
	const otherCompanyId = await server.addCompany(siteId, 'Steel Ltd');
	return {
		siteId,
		companyId,
		otherCompanyId,
		surveyor: await server.addMember(siteId, ['site-engineer']),
		secondSurveyor: await server.addMember(siteId, ['site-engineer']),
		engineer: await server.addMember(siteId, ['project-engineer']),
		contractor: await server.addMember(siteId, ['contractor'], companyId),
		owner: await server.addMember(siteId, ['owners-representative']),
		observer: await server.addMember(siteId, ['observer']),
	};
}
export type BuiltSite = Awaited<ReturnType<typeof aSite>>;
