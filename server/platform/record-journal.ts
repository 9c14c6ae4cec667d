import { createHash } from 'node:crypto';
import { createReadStream } from 'node:fs';
import { mkdir, open, stat } from 'node:fs/promises';
import { dirname } from 'node:path';
import { createInterface } from 'node:readline';

/** What the journal holds of one site: the hashes of its records, in the order written. */
export type JournalHashes = ReadonlyMap<string, readonly string[]>;

/**
 * The second copy of every sealed record: one line each, in a file that is only ever added to and is synced to the disk before anybody is
 * told that something was signed (the embedded database never syncs). Reads what is there at the opening.
 */
export interface RecordJournal {
	hashes: JournalHashes;
	/** What was odd about the file, in sentences. */
	said: readonly string[];
	/** Resolves when the lines are on the disk. One after the other, whoever calls. */
	append: (siteId: string, records: readonly { sha256: string; text: string }[]) => Promise<void>;
}

export async function openRecordJournal(path: string): Promise<RecordJournal> {
	await mkdir(dirname(path), { recursive: true });
	const { hashes, said, isLastLineWhole } = await readJournal(path);
	let last: Promise<void> = Promise.resolve();
	let isNewLineDue = !isLastLineWhole;
	const write = async (siteId: string, records: readonly { sha256: string; text: string }[]): Promise<void> => {
		const lines = records.map(({ text }) => `${text}\n`).join('');
		const file = await open(path, 'a', 0o600);
		try {
			await file.appendFile(isNewLineDue ? `\n${lines}` : lines);
			await file.sync();
			isNewLineDue = false;
		} catch (error) {
			// What did get there is no line of ours; the next one must not be glued to it.
			isNewLineDue = true;
			throw error;
		} finally {
			await file.close();
		}
		hashes.set(siteId, [...(hashes.get(siteId) ?? []), ...records.map(({ sha256 }) => sha256)]);
	};
	return {
		hashes,
		said,
		append: (siteId, records) => {
			const next = last.then(() => write(siteId, records));
			last = next.catch(() => undefined);
			return next;
		},
	};
}

async function readJournal(path: string): Promise<{ hashes: Map<string, readonly string[]>; said: string[]; isLastLineWhole: boolean }> {
	const hashes = new Map<string, string[]>();
	const said: string[] = [];
	const size = await stat(path).then(
		(found) => found.size,
		() => 0,
	);
	if (size === 0) return { hashes, said, isLastLineWhole: true };
	let number = 0;
	for await (const line of createInterface({ input: createReadStream(path, 'utf8'), crlfDelay: Number.POSITIVE_INFINITY })) {
		number += 1;
		if (line === '') continue;
		const siteId = siteOf(line);
		if (siteId === null) {
			said.push(`Line ${number} of the records' journal ${path} is no whole record. It is passed over.`);
			continue;
		}
		const own = hashes.get(siteId) ?? [];
		own.push(createHash('sha256').update(line, 'utf8').digest('hex'));
		hashes.set(siteId, own);
	}
	return { hashes, said, isLastLineWhole: await endsWithNewLine(path, size) };
}

function siteOf(line: string): string | null {
	try {
		const value: unknown = JSON.parse(line);
		const siteId = (value as { body?: { site?: { siteId?: unknown } } }).body?.site?.siteId;
		return typeof siteId === 'string' ? siteId : null;
	} catch {
		return null;
	}
}

async function endsWithNewLine(path: string, size: number): Promise<boolean> {
	const file = await open(path, 'r');
	try {
		const { buffer } = await file.read(Buffer.alloc(1), 0, 1, size - 1);
		return buffer[0] === 0x0a;
	} finally {
		await file.close();
	}
}
