import { randomUUID } from 'node:crypto';
import { createServer, type Server } from 'node:http';
import { join } from 'node:path';
import { connectDatabase } from '../db/connect.ts';
import type { Connection } from '../db/connection.ts';
import { sealOpenSecrets } from '../features/account/seal-open-secrets.ts';
import { deliverNotices } from '../platform/deliver-notices.ts';
import { diskFiles } from '../platform/disk-files.ts';
import { type OpenMail, openMail } from '../platform/open-mail.ts';
import { photoAddresses } from '../platform/photo-addresses.ts';
import { photoStoreOf } from '../platform/photo-store.ts';
import type { JobRunner, Platform } from '../platform/platform.ts';
import { openPostman, type Postman } from '../platform/postman.ts';
import { publishKeys } from '../platform/publish-keys.ts';
import { openQueue, type Queue } from '../platform/queue.ts';
import { openRecordJournal } from '../platform/record-journal.ts';
import { openRecordStore } from '../platform/record-store.ts';
import { openSecretBox } from '../platform/secret-box.ts';
import { openSessions } from '../platform/session.ts';
import { openSigningKeys } from '../platform/signing-keys.ts';
import { openUploads } from '../platform/upload-server.ts';
import { clientOf } from './client.ts';
import type { Configuration } from './configuration.ts';
import { demoOn } from './demo.ts';
import { httpApp, uploadsPath } from './http.ts';
import { jobRunners } from './jobs.ts';
import { router } from './router.ts';
import { watchHolds } from './watch-holds.ts';

/** One request may take this long to arrive: a model over a site's mobile network. An upload that is cut goes on where it was. */
const requestTimeoutMs = 30 * 60_000;

/** How long an idle connection is kept: longer than proxies and browsers usually do (60 s), so that it is they who close it and none is reset under a request. */
const keepAliveMs = 65_000;

/** A server that answers, and works on its jobs. */
export interface RunningServer {
	address: string;
	platform: Platform;
	/** What to say of the demo site; null without one. */
	demo: string | null;
	/** Lets go of everything: connections, jobs (they go back into the queue), database, lock. */
	close: () => Promise<void>;
}

/**
 * Opens the database, listens, takes up the jobs, and makes the demo site where it is wished and no stop was asked for. Throws a plain
 * sentence where one of them cannot be had; nothing stays open then.
 */
export async function startServer(configuration: Configuration, stop: AbortSignal): Promise<RunningServer> {
	return startOn(await connectDatabase(configuration), configuration, jobRunners, stop);
}

/** The same on an open database, as in tests. The database is closed with the rest. */
export async function startOn(
	connection: Connection,
	configuration: Configuration,
	runners: readonly JobRunner[],
	stop?: AbortSignal,
): Promise<RunningServer> {
	const queue = openQueue(connection, runners);
	const keys = await openSigningKeys(configuration.dataDir);
	const journal = await openRecordJournal(join(configuration.dataDir, 'journal', 'records.jsonl'));
	const mail = await openMail(configuration.mail, join(configuration.dataDir, 'mailbox'));
	let address = '';
	const files = diskFiles(join(configuration.dataDir, 'files'));
	const now = () => new Date();
	const platform: Platform = {
		db: connection.db,
		transaction: queue.transaction,
		files,
		photos: photoStoreOf(configuration.photos, files),
		photoAddresses: photoAddresses(now),
		uploadFolder: join(configuration.dataDir, 'uploads'),
		jobs: queue.jobs,
		records: openRecordStore(connection.db, keys.current, journal),
		secrets: await openSecretBox(configuration.dataDir),
		mail: { isOn: mail.service !== null, mailbox: mail.mailbox },
		publicUrl: () => configuration.publicUrl ?? address,
		now,
		newId: randomUUID,
	};
	const sessions = openSessions({ db: platform.db, isSecure: configuration.isCookieSecure, now: platform.now });
	const beforeLook = () => deliverNotices(platform);
	const postman = openPostman({ db: platform.db, service: mail.service, beforeLook, now: platform.now });
	const server = createServer({ requestTimeout: requestTimeoutMs, keepAliveTimeout: keepAliveMs });
	const holds = watchHolds(platform);
	let closeClient = async () => {};
	let isReady = false;
	const close = () => holds.stop().then(() => closeAll(server, closeClient, { postman, mail }, queue, connection));
	try {
		const uploads = openUploads({ platform, path: uploadsPath, largestBytes: configuration.largestUploadBytes });
		await publishKeys(platform.db, keys, platform.now());
		for (const sentence of [...journal.said, ...(await platform.records.compare())]) console.error(sentence);
		await sessions.deleteExpired();
		await sealOpenSecrets(platform);
		await uploads.sweep();
		const client = await clientOf({ isDevelopment: configuration.isDevelopment, server });
		closeClient = client.close;
		const parts = { platform, sessions, uploads, router, client: client.handler, settings: configuration, isReady: () => isReady };
		server.on('request', httpApp(parts));
		address = await listen(server, configuration);
		await queue.start(platform);
		postman.start();
		const demo = configuration.isDemoWished && !stop?.aborted ? await demoOn(platform) : null;
		isReady = true;
		return { address, platform, demo, close };
	} catch (error) {
		await close();
		throw error;
	}
}

async function closeAll(
	server: Server,
	closeClient: () => Promise<void>,
	{ postman, mail }: { postman: Postman; mail: OpenMail },
	queue: Queue,
	connection: Connection,
): Promise<void> {
	server.close();
	server.closeAllConnections();
	await closeClient();
	await postman.stop();
	await mail.close();
	await queue.stop();
	await connection.close();
	await queue.abandon();
}

function listen(server: Server, { port, host }: Configuration): Promise<string> {
	return new Promise((resolve, reject) => {
		server.once('error', (error: NodeJS.ErrnoException) => reject(new Error(sentenceOf(error, port, host), { cause: error })));
		server.listen(port, host, () => {
			const bound = server.address();
			const name = host.includes(':') ? `[${host}]` : host;
			resolve(`http://${name}:${typeof bound === 'object' && bound !== null ? bound.port : port}`);
		});
	});
}

function sentenceOf(error: NodeJS.ErrnoException, port: number, host: string): string {
	if (error.code === 'EADDRINUSE')
		return `Port ${port} on ${host} is taken by another program. Stop that one, or set PORT to another number.`;
	if (error.code === 'EACCES') return `This user may not listen on port ${port}. Set PORT to a number over 1023.`;
	if (error.code === 'EADDRNOTAVAIL') return `This machine has no address ${host}. Set HOST to one it has, or to 127.0.0.1.`;
	return `The server cannot listen on ${host}, port ${port}: ${error.message}`;
}
