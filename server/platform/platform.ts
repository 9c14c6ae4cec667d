import type { z } from 'zod';
import type { Role } from '#shared/permissions.ts';
import type { Db, Transaction } from '../db/database.ts';
import type { Mailbox } from './mail.ts';
import type { PhotoAddresses } from './photo-addresses.ts';
import type { RecordStore } from './record-store.ts';
import type { SecretBox } from './secret-box.ts';

/** What a command may use of the world. One value, made at the start and handed on; tests make their own. */
export interface Platform {
	db: Db;
	/** Commits when `work` resolves, else rolls back. No file, mail or hashing inside. */
	transaction: <T>(work: (tx: Transaction) => Promise<T>) => Promise<T>;
	files: FileStore;
	/** Photos, by their SHA-256: with the other files, or in a bucket. */
	photos: PhotoStore;
	photoAddresses: PhotoAddresses;
	/** Where uploads lie until a command takes them (`takeUpload`). */
	uploadFolder: string;
	jobs: JobQueue;
	/** What was signed: sealed, chained, journalled. */
	records: RecordStore;
	/** For what must be read again and is nobody’s to read in the database. */
	secrets: SecretBox;
	/** Whether mail can be sent at all, and the local fake's mailbox where it stands in for a service. */
	mail: { isOn: boolean; mailbox: Mailbox | null };
	/** What links in mails begin with: from the configuration or our own socket, never from a request. */
	publicUrl: () => string;
	now: () => Date;
	newId: () => string;
}

/** Bytes by their SHA-256, kept once, never changed. */
export interface FileStore {
	/** Takes the bytes and answers their hash and length; the same bytes twice are one file. */
	keep: (bytes: Uint8Array) => Promise<KeptFile>;
	/** The same for a file already on this disk, which is moved in. */
	keepFrom: (path: string) => Promise<KeptFile>;
	/** Where a program of ours can read it. */
	pathOf: (sha256: string) => string;
	read: (sha256: string) => Promise<Uint8Array>;
}

/** What photos need of a store: no path, since a bucket has none. */
export type PhotoStore = Pick<FileStore, 'keep' | 'read'>;

export interface KeptFile {
	sha256: string;
	bytes: number;
}

/** The name and input of long work, from `shared/<noun>/jobs.ts`. Every input names our own row. */
export interface JobDefinition<Input extends { jobId: string; siteId: string } = { jobId: string; siteId: string }> {
	name: string;
	input: z.ZodType<Input>;
}

export interface JobQueue {
	/** Sent inside the transaction: gone after a rollback, there after the commit. Throws where the queue is not known. */
	enqueue: <Input extends { jobId: string; siteId: string }>(
		tx: Transaction,
		definition: JobDefinition<Input>,
		input: Input,
	) => Promise<void>;
}

/** What a job's runner is handed besides its input. */
export interface JobContext {
	platform: Platform;
	/** Kept at most four times a second. */
	report: (progress: { doing: string; done: number; of: number }) => void;
	/** Aborted by the person's cancel, by the time limit, or by the server's end. */
	signal: AbortSignal;
}

/** How a job ended for the person. A refusal is the input's fault and says why; a throw is ours and is tried again. */
export type JobEnd = { state: 'done' } | { state: 'failed'; reason: string } | { state: 'cancelled' };

export interface JobRunner {
	name: string;
	run: (input: unknown, context: JobContext) => Promise<JobEnd>;
	/** Called once when all tries threw: what the job was to make must not stay "being made". */
	giveUp?: (input: unknown, platform: Platform, reason: string) => Promise<void>;
}

/** A person with a session. */
export interface SignedIn {
	userId: string;
	name: string;
	email: string;
	/** The network address of the request, for the audit trail; a job has none. */
	address?: string;
	/** What was proved in the session of the request; a job has none. */
	proof?: SessionProof;
}

/** How well a session knows its person (`second-factor.ts` asks it). */
export interface SessionProof {
	/** Until when the person counts as just having proved who they are; null: not since the session began. */
	freshUntil: Date | null;
	/** A second factor was shown in this session. */
	hasSecondFactor: boolean;
}

/** A person on the site of the request. */
export interface Member extends SignedIn {
	siteId: string;
	roles: readonly Role[];
	companyIds: readonly string[];
	/** Roles held as somebody's deputy; absent: none. */
	asDeputyOf?: readonly { role: Role; name: string }[];
}
