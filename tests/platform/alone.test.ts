import { spawn } from 'node:child_process';
import { appendFileSync, existsSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, expect, it } from 'vitest';

let folder: string;
beforeEach(() => {
	folder = mkdtempSync(join(tmpdir(), 'bb-alone-'));
});
afterEach(() => rmSync(folder, { recursive: true, force: true }));

/** A process that says when its turn begins and ends, with a pause between in which another would show. */
function turn(name: string): Promise<number | null> {
	const script = `
		import { appendFileSync } from 'node:fs';
		import { alone } from ${JSON.stringify(new URL('../../server/scripts/alone.mjs', import.meta.url).href)};
		const log = ${JSON.stringify(join(folder, 'log'))};
		alone(${JSON.stringify(join(folder, 'lock'))}, () => {
			appendFileSync(log, '${name} in\\n');
			Atomics.wait(new Int32Array(new SharedArrayBuffer(4)), 0, 0, 150);
			appendFileSync(log, '${name} out\\n');
		});`;
	const child = spawn(process.execPath, ['--input-type=module', '-e', script], { stdio: 'inherit' });
	return new Promise((resolve) => child.on('exit', resolve));
}

async function expectTurns(names: string[]): Promise<void> {
	appendFileSync(join(folder, 'log'), '');
	expect(await Promise.all(names.map(turn))).toEqual(names.map(() => 0));
	const lines = readFileSync(join(folder, 'log'), 'utf8').trim().split('\n');
	expect(
		lines
			.filter((line) => line.endsWith(' in'))
			.map((line) => line.slice(0, -3))
			.sort(),
	).toEqual(names);
	for (let i = 0; i < lines.length; i += 2) expect(lines[i + 1]).toBe(lines[i]!.replace(' in', ' out'));
	expect(existsSync(join(folder, 'lock'))).toBe(false);
}

it('processes started at once take turns', () => expectTurns(['a', 'b', 'c', 'd']));

it('a holder that died stands in nobody’s way, and still only one follows it', async () => {
	const dead = spawn(process.execPath, ['-e', '']);
	await new Promise((resolve) => dead.on('exit', resolve));
	writeFileSync(join(folder, 'lock'), String(dead.pid));
	await expectTurns(['a', 'b', 'c', 'd']);
});
