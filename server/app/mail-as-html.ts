import type { RequestHandler } from 'express';
import type { Platform } from '../platform/platform.ts';

/** A mail of the local fake as a mail program shows it: its own styles and nothing else, no script, apart from our pages. */
export function mailAsHtml({ mail }: Pick<Platform, 'mail'>): RequestHandler {
	return async (request, response, next) => {
		const kept = (await mail.mailbox?.list()) ?? [];
		const one = kept.find(({ keptId }) => keptId === request.params.keptId);
		if (one === undefined) return next();
		response.set({
			'content-security-policy':
				"default-src 'none'; style-src 'unsafe-inline'; sandbox allow-popups allow-top-navigation-by-user-activation",
			'cache-control': 'no-store',
		});
		response.type('html').send(one.html);
	};
}
