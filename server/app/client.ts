import { existsSync } from 'node:fs';
import type { Server } from 'node:http';
import { resolve } from 'node:path';
import type { RequestHandler } from 'express';
import { builtClient } from './built-client.ts';

export interface Client {
	handler: RequestHandler;
	close: () => Promise<void>;
}

/** The browser's side: built files, or while developing Vite's own server on the same port. */
export async function clientOf({ isDevelopment, server }: { isDevelopment: boolean; server: Server }): Promise<Client> {
	if (isDevelopment) {
		const { createServer } = await import('vite');
		const vite = await createServer({ server: { middlewareMode: true, hmr: { server } }, appType: 'spa' });
		return { handler: vite.middlewares, close: () => vite.close() };
	}
	const folder = resolve('dist/client');
	return { handler: existsSync(folder) ? builtClient(folder) : sayNotBuilt, close: async () => {} };
}

const sayNotBuilt: RequestHandler = (request, response, next) => {
	if (request.path !== '/') return next();
	response.status(503).type('text').send('The pages are not built yet: run "npm start", or "npm run build" first.');
};
