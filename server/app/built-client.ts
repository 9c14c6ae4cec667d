import { createHash } from 'node:crypto';
import { readdirSync, readFileSync } from 'node:fs';
import { readFile } from 'node:fs/promises';
import { extname, join } from 'node:path';
import { promisify } from 'node:util';
import { gzip } from 'node:zlib';
import type { RequestHandler } from 'express';

const mediaTypes: Record<string, string> = {
	'.html': 'text/html; charset=utf-8',
	'.js': 'text/javascript; charset=utf-8',
	'.css': 'text/css; charset=utf-8',
	'.map': 'application/json',
	'.json': 'application/json',
	'.webmanifest': 'application/manifest+json',
	'.svg': 'image/svg+xml',
	'.png': 'image/png',
	'.ico': 'image/x-icon',
	'.wasm': 'application/wasm',
	'.woff': 'font/woff',
	'.woff2': 'font/woff2',
	'.txt': 'text/plain; charset=utf-8',
};
/** Others are packed already. */
const isWorthPacking = /\.(html|js|css|map|json|webmanifest|svg|wasm|txt)$/;

interface ClientFile {
	path: string;
	mediaType: string;
	entityTag: string;
	isHashed: boolean;
}

/**
 * The built client: exactly the files that are there at the start, packed once when first asked for. Any other address without a file
 * ending is one of the client's own pages. Hashed names are kept by the browser for good, the page itself is asked for each time.
 */
export function builtClient(folder: string): RequestHandler {
	const files = listFiles(folder);
	const page = files.get('/index.html');
	const packed = new Map<string, Promise<Buffer>>();
	const pack = (path: string): Promise<Buffer> => {
		const known = packed.get(path) ?? readFile(path).then((bytes) => promisify(gzip)(bytes));
		packed.set(path, known);
		return known;
	};
	return async (request, response, next) => {
		if (request.method !== 'GET' && request.method !== 'HEAD') return next();
		const file = files.get(request.path) ?? (extname(request.path) === '' ? page : undefined);
		if (file === undefined) return next();
		response.set({
			'content-type': file.mediaType,
			'cache-control': file.isHashed ? 'public, max-age=31536000, immutable' : 'no-cache',
			etag: file.entityTag,
			vary: 'accept-encoding',
		});
		if (request.headers['if-none-match'] === file.entityTag) return void response.status(304).end();
		const isPacked = isWorthPacking.test(file.path) && request.acceptsEncodings('gzip') !== false;
		const bytes = isPacked ? await pack(file.path) : await readFile(file.path);
		if (isPacked) response.set('content-encoding', 'gzip');
		response.set('content-length', String(bytes.byteLength));
		response.end(request.method === 'HEAD' ? undefined : bytes);
	};
}

function listFiles(folder: string): Map<string, ClientFile> {
	const entries = readdirSync(folder, { recursive: true, withFileTypes: true }).filter((entry) => entry.isFile());
	return new Map(
		entries.map((entry) => {
			const path = join(entry.parentPath, entry.name);
			const address = path.slice(folder.length).replaceAll('\\', '/');
			const file: ClientFile = {
				path,
				mediaType: mediaTypes[extname(path)] ?? 'application/octet-stream',
				entityTag: `"${createHash('sha256').update(readFileSync(path)).digest('base64url').slice(0, 22)}"`,
				isHashed: address.startsWith('/assets/'),
			};
			return [address, file];
		}),
	);
}
