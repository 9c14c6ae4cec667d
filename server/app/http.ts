import type { AnyRouter } from '@orpc/server';
import { ORPCError, onError } from '@orpc/server';
import { BodyLimitPlugin, CompressionPlugin, RPCHandler } from '@orpc/server/node';
import { sql } from 'drizzle-orm';
import express, { type Express, type Request, type RequestHandler, type Response } from 'express';
import type { RequestContext } from '../platform/guard.ts';
import { photoPath } from '../platform/photo-addresses.ts';
import type { Platform, SignedIn } from '../platform/platform.ts';
import { isOwnOrigin, type Sessions } from '../platform/session.ts';
import { countTries } from '../platform/tries.ts';
import type { UploadServer } from '../platform/upload-server.ts';
import { errorPage, notFoundPage } from './error-page.ts';
import { securityHeaders } from './headers.ts';
import { mailAsHtml } from './mail-as-html.ts';
import { photoAsImage } from './photo-as-image.ts';
import type { router } from './router.ts';

export const uploadsPath = '/api/uploads';
/** A call's body. Files go the way of the uploads. */
const largestCallBytes = 1_000_000;

export interface HttpParts {
	platform: Platform;
	sessions: Sessions;
	uploads: UploadServer;
	router: typeof router;
	client: RequestHandler;
	/** False until the jobs are taken up and the demo site is made. */
	isReady: () => boolean;
	settings: { isCookieSecure: boolean; isDevelopment: boolean; proxyHops: number };
}

/** The web server's parts in their order: headers, origin, uploads, calls, client. */
export function httpApp({ platform, sessions, uploads, router, client, isReady, settings }: HttpParts): Express {
	const app = express();
	app.disable('x-powered-by');
	app.set('trust proxy', settings.proxyHops);
	app.use(securityHeaders({ isSecure: settings.isCookieSecure, isDevelopment: settings.isDevelopment }));
	app.get('/health', async (_request, response) => {
		await platform.db.execute(sql`select 1`);
		response.status(isReady() ? 200 : 503).set('cache-control', 'no-store');
		response.json({ state: isReady() ? 'up' : 'starting' });
	});
	app.use(refuseForeignOrigin);
	// Before anything that reads bodies: an upload's body is the file.
	app.use(uploadsPath, async (request, response) => {
		await uploads.handle(request, response, await recognise(sessions, request, response));
	});
	app.use('/rpc', calls({ platform, sessions, router }));
	app.get('/api/mailbox/:keptId', mailAsHtml(platform));
	app.get(`${photoPath}/:token`, photoAsImage(platform));
	app.use(['/rpc', '/api'], notFoundPage);
	app.use(client);
	app.use(notFoundPage);
	app.use(errorPage);
	return app;
}

/** What changes something must come from a page of ours: a cookie alone proves nothing about who made the browser send it. */
const refuseForeignOrigin: RequestHandler = (request, response, next) => {
	const isReading = request.method === 'GET' || request.method === 'HEAD';
	if (isReading || isOwnOrigin(request.headers.origin, request.host)) return next();
	response.status(403).json({ message: 'This came from another address than this server’s own pages.' });
};

/** Who asks; a prolonged session's cookie is sent again. */
async function recognise(sessions: Sessions, request: Request, response: Response): Promise<SignedIn | null> {
	const { signedIn, cookie } = await sessions.validate(request.headers.cookie);
	if (cookie !== null) response.append('set-cookie', cookie);
	return signedIn && { ...signedIn, ...(request.ip !== undefined && { address: request.ip }) };
}

function calls({ platform, sessions, router }: Pick<HttpParts, 'platform' | 'sessions' | 'router'>): RequestHandler {
	const tries = countTries(platform.now);
	const handler = new RPCHandler<RequestContext>(router satisfies AnyRouter, {
		plugins: [new BodyLimitPlugin({ maxBodySize: largestCallBytes }), new CompressionPlugin()],
		// Inside of the decoding: what cannot be read is the sender's fault and no line of the log.
		clientInterceptors: [
			onError((error) => {
				if (!(error instanceof ORPCError)) console.error('A call failed:', error);
			}),
		],
	});
	return async (request, response, next) => {
		const origin = { userAgent: request.headers['user-agent'] ?? null, address: request.ip ?? null };
		const context: RequestContext = {
			platform,
			signedIn: await recognise(sessions, request, response),
			session: {
				start: async (userId, opened) => void response.append('set-cookie', await sessions.create(userId, origin, opened)),
				end: async () => void response.append('set-cookie', await sessions.end(request.headers.cookie)),
				id: sessions.idOf(request.headers.cookie),
			},
			address: request.ip ?? 'unknown',
			tries,
		};
		response.set('cache-control', 'no-store');
		const { matched } = await handler.handle(request, response, { prefix: '/rpc', context });
		if (!matched) next();
	};
}
