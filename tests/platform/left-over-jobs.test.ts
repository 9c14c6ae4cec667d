import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import { buildPrograms, type Program, type Programs } from './run-program.ts';

let programs: Programs;
const dataDir = mkdtempSync(join(tmpdir(), 'bb-jobs-'));
beforeAll(async () => {
	programs = await buildPrograms(['tests/platform/job-program.ts']);
}, 60_000);
afterEach(() => programs.endAll());
afterAll(() => {
	programs.remove();
	rmSync(dataDir, { recursive: true, force: true });
});

const start = (environment: { BEGIN?: 'yes'; FINISH?: 'yes' }): Program =>
	programs.run('job-program', { DATA_DIR: dataDir, ...environment });

describe('a job that was running when the server ended', () => {
	it('by kill -9 is taken up at the next start, and done', async () => {
		const first = start({ BEGIN: 'yes' });
		await first.says('try');
		first.child.kill('SIGKILL');
		expect(await first.ended).toBe('SIGKILL');
		const second = start({ FINISH: 'yes' });
		await second.says('ended: done');
		expect(second.out()).toContain('try');
	}, 120_000);

	it('three times over, cleanly or not, is given up with a sentence', async () => {
		for (const [index, signal] of (['SIGTERM', 'SIGKILL', 'SIGTERM'] as const).entries()) {
			const program = start(index === 0 ? { BEGIN: 'yes' } : {});
			await program.says('try');
			program.child.kill(signal);
			expect(await program.ended, program.err()).toBe(signal === 'SIGTERM' ? 0 : signal);
			expect(program.out()).not.toContain('ended');
		}
		const last = start({ FINISH: 'yes' });
		await last.says('ended: failed The server ended in the middle of this, three times over.');
		expect(last.out()).toContain('given up: The server ended');
		expect(last.out()).not.toContain('try');
	}, 120_000);
});
