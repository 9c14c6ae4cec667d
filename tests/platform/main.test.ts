import { existsSync, mkdtempSync, rmSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import { buildPrograms, freePort, type Program, type Programs } from './run-program.ts';

let programs: Programs;
const dataDir = mkdtempSync(join(tmpdir(), 'bb-main-'));
beforeAll(async () => {
	programs = await buildPrograms(['server/main.ts']);
}, 60_000);
afterEach(() => programs.endAll());
afterAll(() => {
	programs.remove();
	rmSync(dataDir, { recursive: true, force: true });
});

const start = (environment: Record<string, string>): Program => programs.run('main', { DATA_DIR: dataDir, DEMO: 'off', ...environment });

describe('the server as a program', () => {
	it('says where it is, answers, refuses a second on its data, and ends cleanly on SIGTERM', async () => {
		const port = String(await freePort());
		const first = start({ PORT: port });
		await first.says(`Batterboard is at http://127.0.0.1:${port}`);
		const answer = await fetch(`http://127.0.0.1:${port}/health`);
		expect(await answer.json()).toEqual({ state: 'up' });

		const second = start({ PORT: '0' });
		expect(await second.ended).toBe(1);
		expect(second.err().trim()).toBe(
			`The folder ${dataDir} is in use by another Batterboard. Stop that one first, or set DATA_DIR to another folder.`,
		);

		first.child.kill('SIGTERM');
		expect(await first.ended).toBe(0);
		expect(first.err()).toBe('');
		await expect(fetch(`http://127.0.0.1:${port}/health`)).rejects.toThrow();
	}, 60_000);

	it('says in words that its port is taken, ends with 1 and lets go of the data', async () => {
		const other = createServer();
		await new Promise<void>((resolve) => other.listen(0, '127.0.0.1', resolve));
		const address = other.address();
		const port = String(typeof address === 'object' ? address?.port : '');
		const refused = start({ PORT: port });
		expect(await refused.ended).toBe(1);
		expect(refused.err().trim()).toBe(
			`Port ${port} on 127.0.0.1 is taken by another program. Stop that one, or set PORT to another number.`,
		);
		other.close();
		const next = start({ PORT: port });
		await next.says('Batterboard is at');
		next.child.kill('SIGINT');
		expect(await next.ended).toBe(0);
	}, 60_000);

	it('stopped in the middle of its start ends with 0 and leaves data that the next start opens', async () => {
		const folder = mkdtempSync(join(tmpdir(), 'bb-early-'));
		const early = start({ PORT: '0', DATA_DIR: folder });
		// The first start makes the database, which takes seconds.
		await expect.poll(() => existsSync(join(folder, 'db')), { timeout: 30_000, interval: 20 }).toBe(true);
		early.child.kill('SIGTERM');
		expect(await early.ended).toBe(0);
		const next = start({ PORT: '0', DATA_DIR: folder });
		await next.says('Batterboard is at');
		next.child.kill('SIGTERM');
		expect(await next.ended).toBe(0);
		rmSync(folder, { recursive: true, force: true });
	}, 60_000);

	it('names the variable that is wrong', async () => {
		const wrong = start({ PORT: '70000' });
		expect(await wrong.ended).toBe(1);
		expect(wrong.err().trim()).toBe('PORT is "70000"; it must be a port number, 0 to 65535.');
		const unreachable = start({ DATABASE_URL: `postgres://nobody@127.0.0.1:${await freePort()}/none` });
		expect(await unreachable.ended).toBe(1);
		expect(unreachable.err()).toMatch(/^The database that DATABASE_URL names does not answer: /);
		expect(unreachable.err()).not.toMatch(/\n\s+at /);
	}, 60_000);
});
