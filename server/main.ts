import { once } from 'node:events';
import { isLoopback, readConfiguration } from './app/configuration.ts';
import { startServer } from './app/start.ts';

// Before the database is opened: a stop in the middle of the start must not leave the folder half made.
// Not once: a terminal and npm both pass a Ctrl-C on, and the second must not cut the closing short.
const stop = new AbortController();
for (const signal of ['SIGTERM', 'SIGINT'] as const) process.on(signal, () => stop.abort());

try {
	const configuration = readConfiguration(process.env, process.argv.slice(2));
	const running = await startServer(configuration, stop.signal);
	console.log(`Batterboard is at ${running.address}`);
	if (running.demo !== null) console.log(running.demo);
	if (running.demo !== null && !isLoopback(configuration.host)) {
		console.error(
			'Others can reach this address, and the demo’s passwords are public: set DEMO=off and another DATA_DIR before real work.',
		);
	}
	if (configuration.mail.kind === 'fake') console.log(`Mail goes nowhere; it can be read at ${running.address}/mailbox`);
	if (configuration.mail.kind === 'none') {
		console.log('No mail can be sent, so nobody can be invited: set RESEND_API_KEY, or MAIL_URL, and MAIL_FROM.');
	}
	if (configuration.isCookieSecure && running.address.startsWith('http:')) {
		console.error('Sign-in cookies travel by TLS only: put a proxy with TLS before this, or set COOKIE_SECURE=off.');
	}
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
