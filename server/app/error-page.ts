import type { ErrorRequestHandler, RequestHandler, Response } from 'express';

/** For what nobody answers. */
export const notFoundPage: RequestHandler = (request, response) => {
	sendSentence(response, 404, request.originalUrl, 'There is nothing at this address.');
};

/** For a fault of ours: written to the log, never shown. */
export const errorPage: ErrorRequestHandler = (error: unknown, request, response, next) => {
	if (response.headersSent) return next(error);
	console.error(`${request.method} ${request.baseUrl}${request.path} failed:`, error);
	sendSentence(response, 500, request.originalUrl, 'Something went wrong on the server. What was stored before is safe; try again.');
};

function sendSentence(response: Response, status: number, address: string, sentence: string): void {
	response.status(status).set('cache-control', 'no-store');
	if (/^\/(rpc|api)\//.test(address)) response.json({ message: sentence });
	else response.type('html').send(page(status, sentence));
}

function page(status: number, sentence: string): string {
	return `<!doctype html><html lang="en"><meta charset="utf-8"><title>${status} · Batterboard</title><body><h1>${sentence}</h1><p><a href="/">To the sites</a></p></body></html>`;
}
