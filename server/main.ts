import { once } from 'node:events';
import { readConfiguration } from './app/configuration.ts';
import { startServer } from './app/start.ts';
import { seedDemo } from './scripts/seed.ts';

// Before the database is opened: a stop in the middle of the start must not leave the folder half made.
// Not once: a terminal and npm both pass a Ctrl-C on, and the second must not cut the closing short.
const stop = new AbortController();
for (const signal of ['SIGTERM', 'SIGINT'] as const) process.on(signal, () => stop.abort());

try {
	const configuration = readConfiguration(process.env, process.argv.slice(2));
	const running = await startServer(configuration);
	if (configuration.isDemoWished && !stop.signal.aborted) {
		const demo = await seedDemo(running.platform);
		if (demo !== null) console.log(demo);
	}
	console.log(`Batterboard is at ${running.address}`);
	if (!stop.signal.aborted) await once(stop.signal, 'abort');
	await running.close();
	process.exit(0);
} catch (error) {
	console.error(isExpected(error) ? error.message : error);
	process.exit(1);
}

/** A sentence for a person, or a defect with its stack. */
function isExpected(error: unknown): error is Error {
	return error instanceof Error && error.constructor === Error;
}
