/**
 * A server with one job runner, as a process that can be killed: BEGIN=yes begins a job, each try is told of. FINISH=yes lets a try
 * come to its end, else it works until it is killed.
 */
import { randomUUID } from 'node:crypto';
import { setTimeout } from 'node:timers/promises';
import { desc } from 'drizzle-orm';
import { z } from 'zod';
import { readConfiguration } from '../../server/app/configuration.ts';
import { startOn } from '../../server/app/start.ts';
import { openEmbedded } from '../../server/db/embedded.ts';
import { users } from '../../server/db/schema/account.ts';
import { jobs } from '../../server/db/schema/job.ts';
import { sites } from '../../server/db/schema/site.ts';
import { startJob } from '../../server/platform/job-row.ts';
import { runnerOf } from '../../server/platform/job-runner.ts';

const definition = { name: 'test.long', input: z.object({ jobId: z.uuid(), siteId: z.uuid() }) };
const runner = runnerOf(
	definition,
	async (_input, { report, signal }) => {
		report({ doing: 'Working', done: 1, of: 2 });
		console.log('try');
		while (process.env.FINISH !== 'yes' && !signal.aborted) await setTimeout(50);
		return process.env.FINISH === 'yes' ? { state: 'done' } : { state: 'cancelled' };
	},
	async (_input, _platform, reason) => console.log(`given up: ${reason}`),
);

const configuration = readConfiguration({ ...process.env, PORT: '0', DEMO: 'off' }, []);
const { platform, close } = await startOn(await openEmbedded(configuration.dataDir), configuration, [runner]);
let isStopping = false;
process.on('SIGTERM', async () => {
	isStopping = true;
	await close();
	process.exit(0);
});
if (process.env.BEGIN === 'yes') {
	const [siteId, userId, createdAt] = [randomUUID(), randomUUID(), platform.now()];
	await platform.db.insert(users).values({ id: userId, email: `${userId}@example.com`, name: 'A', passwordHash: 'none', createdAt });
	await platform.db
		.insert(sites)
		.values({ id: siteId, name: 'S', timeZone: 'UTC', isInvented: true, isFitCheckedBySecond: false, createdAt });
	await platform.transaction((tx) =>
		startJob(platform, tx, { userId }, definition, { jobId: randomUUID(), siteId }, { subjectId: siteId }),
	);
}
while (!isStopping) {
	try {
		const [job] = await platform.db.select().from(jobs).orderBy(desc(jobs.createdAt)).limit(1);
		if (job !== undefined && (job.state === 'done' || job.state === 'failed')) console.log(`ended: ${job.state} ${job.reason ?? ''}`);
	} catch (error) {
		if (!isStopping) throw error;
	}
	await setTimeout(100);
}
