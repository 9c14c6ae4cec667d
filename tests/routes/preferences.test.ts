import { and, eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { defaultPreferences } from '#shared/account/preferences.ts';
import { auditEntries } from '../../server/db/schema/record.ts';
import { cookieOf, openTestServer, type TestServer } from './harness.ts';
import { refusalCode } from './refusal-code.ts';

let server: TestServer;
beforeAll(async () => {
	server = await openTestServer();
});
afterAll(() => server.close());

describe('how a person reads', () => {
	it('is kept at the server for every device, whole, of that person alone, with what it was before', async () => {
		const { platform } = server;
		const [pia, other] = [await server.addPerson('Pia Prefers'), await server.addPerson('Otto Other')];
		const here = server.api(pia.cookie);
		expect(await here.account.preferences()).toEqual(defaultPreferences);
		const wanted = { colourSet: 'dark', lengths: 'feet-inches', decimalMark: ',', dateLanguage: 'de', notices: 'none' } as const;
		await here.account.savePreferences(wanted);
		const elsewhere = server.api(cookieOf(await server.sessions.create(pia.userId)));
		expect(await elsewhere.account.preferences()).toEqual(wanted);
		expect(await server.api(other.cookie).account.preferences()).toEqual(defaultPreferences);
		const [entry] = await platform.db
			.select()
			.from(auditEntries)
			.where(and(eq(auditEntries.kind, 'preferences-changed'), eq(auditEntries.subjectId, pia.userId)));
		expect(entry).toMatchObject({ userId: pia.userId, siteId: null, data: { before: defaultPreferences, after: wanted } });
	});

	it('takes no value it does not know, and nothing beside', async () => {
		const { account } = server.api((await server.addPerson('Bo Bad')).cookie);
		const save = (wanted: object) =>
			refusalCode(account.savePreferences({ ...defaultPreferences, ...wanted } as typeof defaultPreferences));
		for (const wanted of [{ lengths: 'cubits' }, { decimalMark: ';' }, { dateLanguage: 'xx' }, { notices: null }, { userId: 'x' }])
			expect(await save(wanted)).toBe('BAD_REQUEST');
		expect(await account.preferences()).toEqual(defaultPreferences);
	});
});
