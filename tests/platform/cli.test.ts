import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { buildPrograms, type Programs } from './run-program.ts';

let programs: Programs;
const folder = mkdtempSync(join(tmpdir(), 'bb-cli-'));
beforeAll(async () => {
	programs = await buildPrograms(['server/cli.ts']);
}, 60_000);
afterAll(() => {
	programs.remove();
	rmSync(folder, { recursive: true, force: true });
});

/** Standard output must be one JSON value and nothing else. */
async function batterboard(args: string[], input = ''): Promise<{ code: unknown; answer: unknown; err: string }> {
	const program = programs.run('cli', {}, input, args);
	const code = await program.ended;
	return { code, answer: JSON.parse(program.out()), err: program.err() };
}

const judgement = { deviationMm: 11, standardUncertaintyMm: 1, limitsMm: [-10, 10], decision: 'guarded' };

describe('the command line', () => {
	it('answers in JSON from standard input or a file, code 0', async () => {
		const answered = { code: 0, answer: { verdict: 'too-close-to-call', conformity: expect.closeTo(0.158655, 5) }, err: '' };
		expect(await batterboard(['judge'], JSON.stringify(judgement))).toEqual(answered);
		const file = join(folder, 'judgement.json');
		writeFileSync(file, JSON.stringify(judgement));
		expect(await batterboard(['judge', file])).toEqual(answered);
	});

	it('refuses with code 2 and says what and where', async () => {
		expect(await batterboard(['judge'], '{')).toMatchObject({ code: 2, answer: { error: { code: 'bad-input' } } });
		expect(await batterboard(['judge'], JSON.stringify({ ...judgement, deviationMm: '1' }))).toMatchObject({
			code: 2,
			answer: { error: { code: 'bad-input', where: 'deviationMm' } },
		});
		expect(await batterboard(['fit'], '{"fit":"free","pairs":[]}')).toMatchObject({
			code: 2,
			answer: { error: { code: 'too-few-pairs' } },
		});
		for (const args of [[], ['toString'], ['nothing'], ['judge', join(folder, 'none.json')], ['judge', 'a', 'b'], ['checkpoints']]) {
			expect(await batterboard(args)).toMatchObject({
				code: 2,
				answer: { error: { code: expect.any(String), message: expect.any(String) } },
			});
		}
	});
});
