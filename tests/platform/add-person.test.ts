import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { openEmbedded } from '../../server/db/embedded.ts';
import { users } from '../../server/db/schema/account.ts';
import { isPassword } from '../../server/platform/password.ts';
import { buildPrograms, type Programs } from './run-program.ts';

let programs: Programs;
const dataDir = mkdtempSync(join(tmpdir(), 'bb-add-person-'));
beforeAll(async () => {
	programs = await buildPrograms(['server/scripts/add-person.ts']);
}, 60_000);
afterAll(async () => {
	await programs.endAll();
	programs.remove();
	rmSync(dataDir, { recursive: true, force: true });
});

const add = async (...said: string[]) => {
	const program = programs.run('add-person', { DATA_DIR: dataDir }, '', said);
	return { code: await program.ended, out: program.out(), err: program.err().trim() };
};

it('adds the first person of an empty server with a password shown once, refuses what it cannot take, and the address a second time', async () => {
	const refused = await add('no address', 'Ida Roen');
	expect(refused).toMatchObject({ code: 1, out: '' });
	expect(refused.err).toContain('Say an e-mail address and a name');
	const added = await add('Ida@Roen.example', 'Ida Roen');
	expect(added).toMatchObject({ code: 0, err: '' });
	const password = /with the password (\S{20})\n/.exec(added.out)?.[1] ?? '';
	const again = await add('ida@roen.example', 'Another Ida');
	expect(again).toMatchObject({ code: 1, out: '', err: 'This address has an account by now. Sign in with it.' });
	const { db, close } = await openEmbedded(dataDir);
	const kept = await db.select().from(users);
	await close();
	expect(kept.map(({ email, name }) => [email, name])).toEqual([['ida@roen.example', 'Ida Roen']]);
	expect(await isPassword(kept[0]?.passwordHash ?? null, password)).toBe(true);
	expect(await isPassword(kept[0]?.passwordHash ?? null, `${password}x`)).toBe(false);
}, 240_000);
