import { appendFileSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { openRecordJournal } from '../../server/platform/record-journal.ts';
import { sha256Hex } from './sample-records.ts';

let folder: string;
let path: string;
beforeEach(() => {
	folder = mkdtempSync(join(tmpdir(), 'bb-journal-'));
	path = join(folder, 'journal', 'records.jsonl');
});
afterEach(() => rmSync(folder, { recursive: true, force: true }));

const recordOf = (siteId: string, n: number) => {
	const text = JSON.stringify({ body: { site: { siteId }, n, line: 'one\ntwo' } });
	return { text, sha256: sha256Hex(text) };
};

describe("the records' journal", () => {
	it('holds one line a record, whoever writes at once, and reads them back by site in order', async () => {
		const journal = await openRecordJournal(path);
		await Promise.all(
			Array.from({ length: 20 }, (_, n) => journal.append(n % 2 === 0 ? 'a' : 'b', [recordOf(n % 2 === 0 ? 'a' : 'b', n)])),
		);
		const again = await openRecordJournal(path);
		expect(again.said).toEqual([]);
		expect(again.hashes.get('a')).toEqual(Array.from({ length: 10 }, (_, n) => recordOf('a', 2 * n).sha256));
		expect(again.hashes).toEqual(journal.hashes);
	});

	it('passes over a line that a power cut left half, says so, and glues nothing to it', async () => {
		await (await openRecordJournal(path)).append('a', [recordOf('a', 1)]);
		appendFileSync(path, recordOf('a', 2).text.slice(0, 20));
		const journal = await openRecordJournal(path);
		expect(journal.said).toEqual([expect.stringContaining('Line 2')]);
		await journal.append('a', [recordOf('a', 2)]);
		expect((await openRecordJournal(path)).hashes.get('a')).toEqual([1, 2].map((n) => recordOf('a', n).sha256));
		expect(readFileSync(path, 'utf8').split('\n')).toHaveLength(4);
	});
});
