import { isContractProcedure } from '@orpc/contract';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { contract } from '#shared/contract.ts';
import { memberships } from '../../server/db/schema/site.ts';
import { openTestServer, type TestServer } from './harness.ts';

const siteEngineer = 'site-engineer';
const projectEngineer = 'project-engineer';
const contractor = 'contractor';
const ownersRepresentative = 'owners-representative';
const observer = 'observer';
const all = [siteEngineer, projectEngineer, contractor, ownersRepresentative, observer] as const;

/** "Who may do what" of the trade's own table, written out by hand: it must not follow from the code it checks. */
const mayAsk: Record<string, 'anybody' | 'signed in' | readonly (typeof all)[number][]> = {
	'account.me': 'anybody',
	'account.signIn': 'anybody',
	'account.askReset': 'anybody',
	'account.resetPassword': 'anybody',
	'account.changePassword': 'signed in',
	'account.sessions': 'signed in',
	'account.endSessions': 'signed in',
	'account.signOut': 'signed in',
	'account.preferences': 'signed in',
	'account.savePreferences': 'signed in',
	'account.askCode': 'anybody',
	'account.signInByCode': 'anybody',
	'account.signInSecond': 'anybody',
	'account.askPasskey': 'anybody',
	'account.signInByPasskey': 'anybody',
	'account.factors': 'signed in',
	'account.reauthenticate': 'signed in',
	'account.askPasskeyAgain': 'signed in',
	'account.beginCodes': 'signed in',
	'account.confirmCodes': 'signed in',
	'account.removeCodes': 'signed in',
	'account.newRecoveryCodes': 'signed in',
	'account.beginPasskey': 'signed in',
	'account.addPasskey': 'signed in',
	'account.removePasskey': 'signed in',
	'mail.mailbox': 'anybody',
	'site.list': 'signed in',
	'site.found': 'signed in',
	'site.board': all,
	'site.get': all,
	'site.settings': all,
	'site.saveSettings': [projectEngineer],
	'site.people': all,
	// Whom one may name is tested in people.test.ts.
	'site.invite': [projectEngineer, contractor, ownersRepresentative],
	'site.sendAgain': [projectEngineer, contractor, ownersRepresentative],
	'site.withdrawInvitation': [projectEngineer, contractor, ownersRepresentative],
	'site.giveRole': [projectEngineer, contractor, ownersRepresentative],
	'site.endRole': all,
	'site.nameDeputy': [siteEngineer, projectEngineer, contractor, ownersRepresentative],
	'site.addCompany': [projectEngineer],
	'site.renameCompany': [projectEngineer],
	'site.openInvitation': 'anybody',
	'site.acceptInvitation': 'anybody',
	'site.declineInvitation': 'anybody',
	// A job tells of surveys and models in the making, before a contractor is shown anything of them.
	'job.get': [siteEngineer, projectEngineer, ownersRepresentative, observer],
	'job.follow': [siteEngineer, projectEngineer, ownersRepresentative, observer],
	'job.cancel': [siteEngineer, projectEngineer],
	'model.list': all,
	'model.revision': all,
	'model.elements': all,
	'model.checkpoints': all,
	'model.picture': all,
	'model.read': [projectEngineer],
	'model.chooseCheckpoints': [siteEngineer],
	'model.addCheckpoint': [siteEngineer],
	'model.renameMarks': [siteEngineer, projectEngineer],
	'model.fieldCsv': all,
	'model.saidOfReading': all,
	'model.chooseReading': [projectEngineer],
	'model.nameAxis': [siteEngineer, projectEngineer],
	'model.removeAxis': [siteEngineer, projectEngineer],
	'model.readAgain': [projectEngineer],
	'model.sameElements': all,
	'model.acceptSame': [projectEngineer],
	'model.previewPlacing': [projectEngineer],
	'model.placingPreview': [projectEngineer],
	'control.list': all,
	'control.get': all,
	'control.store': [siteEngineer],
	'survey.list': all,
	'survey.get': all,
	'survey.points': all,
	'survey.store': [siteEngineer],
	'survey.voidPoints': [siteEngineer],
	'survey.unvoidPoints': [siteEngineer],
	'fit.pairs': all,
	'fit.list': all,
	'fit.get': all,
	'fit.make': [siteEngineer],
	'fit.ties': all,
	'fit.makeTogether': [siteEngineer],
	'fit.adopt': [siteEngineer],
	'fit.report': all,
	'fit.confirm': [siteEngineer],
	'tolerance.list': all,
	'tolerance.get': all,
	'tolerance.weigh': all,
	'tolerance.saveDraft': [projectEngineer],
	'tolerance.discardDraft': [projectEngineer],
	'tolerance.issue': [projectEngineer],
	'check.list': all,
	'check.get': all,
	'check.csv': all,
	'check.run': [siteEngineer],
	'check.publishPlan': [siteEngineer],
	'check.publish': [siteEngineer],
	'check.takeBack': [siteEngineer],
	'check.withdraw': [siteEngineer],
	'flag.list': all,
	'flag.get': all,
	'flag.answer': [contractor],
	'flag.askTime': [contractor],
	'flag.putRight': [contractor],
	// A site engineer only that it is to be surveyed again: tested in flag.test.ts.
	'flag.decide': [siteEngineer, projectEngineer],
	'flag.grantTime': [projectEngineer],
	'flag.consent': [ownersRepresentative],
	// One's own act only: tested in flag-acts.test.ts.
	'flag.takeBack': [siteEngineer, projectEngineer, contractor, ownersRepresentative],
	'flag.bringPoints': [contractor],
	'flag.storePoints': [siteEngineer],
	'flag.broughtFile': all,
	'flag.comment': [siteEngineer, projectEngineer, contractor, ownersRepresentative],
	'flag.addPhoto': [siteEngineer, projectEngineer, contractor, ownersRepresentative],
	'flag.shootList': all,
	'flag.shootCsv': all,
	'record.audit': [siteEngineer, projectEngineer, ownersRepresentative, observer],
	'record.auditCsv': [siteEngineer, projectEngineer, ownersRepresentative, observer],
	'record.keys': 'anybody',
	'record.list': all,
	'record.get': all,
	'record.chain': [siteEngineer, projectEngineer, ownersRepresentative, observer],
	'pour.list': all,
	'pour.board': all,
	'pour.add': [projectEngineer],
	'pour.changeElements': [projectEngineer],
	'pour.giveElements': [projectEngineer],
	'pour.get': all,
	'pour.shown': all,
	'pour.setList': [projectEngineer],
	'pour.call': [contractor],
	'pour.submit': [projectEngineer],
	'pour.release': [ownersRepresentative],
	'pour.askMore': [ownersRepresentative],
	'pour.refuse': [ownersRepresentative],
	'pour.withdraw': [ownersRepresentative],
	'pour.beginConcreting': [contractor],
	'pour.endConcreting': [contractor],
	'pour.seeHold': all,
	'pour.giveNotice': [contractor],
	'pour.sayWitness': [siteEngineer, projectEngineer, ownersRepresentative],
	'pour.meetCondition': [projectEngineer, contractor],
};

function pathsOf(node: object, path: string[] = []): string[] {
	if (isContractProcedure(node)) return [path.join('.')];
	return Object.entries(node).flatMap(([key, child]) => pathsOf(child, [...path, key]));
}

let server: TestServer;
let siteId: string;
const cookies: Record<string, string | undefined> = {};
beforeAll(async () => {
	server = await openTestServer();
	siteId = await server.addSite();
	const companyId = await server.addCompany(siteId, 'Fennick Forms');
	for (const role of all) cookies[role] = (await server.addMember(siteId, [role], role === contractor ? companyId : undefined)).cookie;
	cookies.both = (await server.addMember(siteId, [siteEngineer, projectEngineer])).cookie;
	cookies.nobody = (await server.addPerson('No Member')).cookie;
	const left = await server.addMember(siteId, [siteEngineer, projectEngineer]);
	await server.platform.db.update(memberships).set({ leftAt: server.platform.now() }).where(eq(memberships.userId, left.userId));
	cookies.left = left.cookie;
	const future = await server.addMember(siteId, [siteEngineer, projectEngineer]);
	await server.platform.db
		.update(memberships)
		.set({ fromAt: new Date(Date.now() + 3_600_000) })
		.where(eq(memberships.userId, future.userId));
	cookies.notYet = future.cookie;
	cookies.elsewhere = (await server.addMember(await server.addSite('Another'), [siteEngineer, projectEngineer])).cookie;
});
afterAll(() => server.close());

/** Only the site is said: the guard answers before the rest is read, so whoever may ask gets an answer or is told what is missing. */
async function ask(path: string, caller: string, input: unknown = { siteId }): Promise<string> {
	const cookie = cookies[caller];
	const answer = await server.fetch(`/rpc/${path.replaceAll('.', '/')}`, {
		method: 'POST',
		headers: { 'content-type': 'application/json' },
		body: JSON.stringify({ json: input }),
		...(cookie === undefined ? {} : { cookie }),
	});
	if (answer.ok) return 'let in';
	const { json } = await answer.json();
	// REFUSED is the command's own word: the guard had let the caller in.
	return json.code === 'BAD_REQUEST' || json.code === 'REFUSED' ? 'let in' : json.code;
}

describe('every route of the contract', () => {
	it('stands in the table, and the table names no other', () => {
		expect(Object.keys(mayAsk).sort()).toEqual(pathsOf(contract).sort());
	});

	it.each(Object.entries(mayAsk).filter(([path]) => path !== 'account.signOut'))(
		'%s answers those it should and nobody else',
		async (path, allowed) => {
			const isForSite = typeof allowed !== 'string';
			const answers = Object.fromEntries(
				await Promise.all(
					[...all, 'both', 'nobody', 'left', 'notYet', 'elsewhere', 'signed out'].map(
						async (caller) => [caller, await ask(path, caller)] as const,
					),
				),
			);
			const expected = Object.fromEntries([
				...all.map((role) => [role, !isForSite || allowed.includes(role) ? 'let in' : 'FORBIDDEN'] as const),
				['both', !isForSite || allowed.includes(siteEngineer) || allowed.includes(projectEngineer) ? 'let in' : 'FORBIDDEN'],
				...['nobody', 'left', 'notYet', 'elsewhere'].map((caller) => [caller, isForSite ? 'NOT_FOUND' : 'let in'] as const),
				['signed out', allowed === 'anybody' ? 'let in' : 'UNAUTHORIZED'],
			]);
			expect(answers).toEqual(expected);
		},
	);

	it('signs out only who is signed in', async () => {
		const person = await server.addPerson('Going Home');
		cookies.going = person.cookie;
		expect(await ask('account.signOut', 'going')).toBe('let in');
		expect(await ask('account.signOut', 'going')).toBe('UNAUTHORIZED');
		expect(await ask('account.signOut', 'signed out')).toBe('UNAUTHORIZED');
	});

	it.each([
		[{}],
		[null],
		[[]],
		['x'],
		[{ siteId: null }],
		[{ siteId: 'x' }],
		[{ siteId: [siteIdOf()] }],
		[{ siteId: '00000000-0000-4000-8000-000000000000' }],
	])('of a site is not found where the input names %j', async (input) => {
		for (const path of ['site.get', 'model.list', 'fit.adopt']) expect(await ask(path, 'both', input)).toBe('NOT_FOUND');
	});
});

/** A well-formed id, wrapped as no input of ours is. */
function siteIdOf(): string {
	return '11111111-1111-4111-8111-111111111111';
}
