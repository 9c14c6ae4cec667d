import type { RequestHandler } from 'express';
import type { Platform } from '../platform/platform.ts';

/** A photo's shown copy by its short-lived address. Nothing of it is run or sniffed, and no shared cache keeps it. */
export function photoAsImage({ photoAddresses, photos }: Pick<Platform, 'photoAddresses' | 'photos'>): RequestHandler<{ token: string }> {
	return async (request, response, next) => {
		const photo = photoAddresses.read(request.params.token);
		if (photo === null) return next();
		const bytes = await photos.read(photo.sha256);
		response.set({
			'content-type': photo.type,
			'cache-control': 'private, max-age=600',
			'x-content-type-options': 'nosniff',
			'content-security-policy': "default-src 'none'",
		});
		response.send(Buffer.from(bytes));
	};
}
