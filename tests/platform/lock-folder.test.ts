import { mkdtempSync, rmSync, symlinkSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { lockFolder } from '../../server/db/lock-folder.ts';

let folder: string;
beforeEach(() => {
	folder = mkdtempSync(join(tmpdir(), 'bb-lock-'));
});
afterEach(() => rmSync(folder, { recursive: true, force: true }));

// 'linux' takes an abstract socket, 'darwin' a socket file: both can be tried here.
describe.each(['linux', 'darwin'] as const)('the lock on a folder as on %s', (platform) => {
	it('is one at a time, by whatever name the folder is called, and free after', async () => {
		const unlock = await lockFolder(folder, platform);
		const alias = `${folder}-alias`;
		symlinkSync(folder, alias);
		await expect(lockFolder(alias, platform)).rejects.toThrow(/is in use by another Batterboard/);
		rmSync(alias);
		await unlock();
		await (await lockFolder(folder, platform))();
	});

	it('leaves other folders alone', async () => {
		const unlock = await lockFolder(folder, platform);
		const other = await lockFolder(join(folder, 'inside'), platform);
		await other();
		await unlock();
	});
});

describe('the socket file', () => {
	it('left by a dead process does not hold', async () => {
		const { createHash } = await import('node:crypto');
		const { realpathSync } = await import('node:fs');
		const name = createHash('sha256').update(realpathSync(folder)).digest('hex').slice(0, 24);
		writeFileSync(join(tmpdir(), `bb-${name}.sock`), '');
		const unlock = await lockFolder(folder, 'darwin');
		await unlock();
	});
});
