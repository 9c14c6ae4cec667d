import type { RequestHandler } from 'express';
import helmet from 'helmet';

/** Scripts, styles and data from here only; WebAssembly and workers for the 3D view. `blob:` is what the viewer makes itself. */
const directives = {
	defaultSrc: ["'self'"],
	scriptSrc: ["'self'", "'wasm-unsafe-eval'"],
	styleSrc: ["'self'"],
	imgSrc: ["'self'", 'blob:', 'data:'],
	fontSrc: ["'self'"],
	connectSrc: ["'self'", 'blob:'],
	workerSrc: ["'self'", 'blob:'],
	objectSrc: ["'none'"],
	baseUri: ["'none'"],
	formAction: ["'self'"],
	frameAncestors: ["'none'"],
};

/** HSTS only where cookies are bound to TLS: on plain http it would lock people out. Vite's own page needs scripts in the text. */
export function securityHeaders({ isSecure, isDevelopment }: { isSecure: boolean; isDevelopment: boolean }): RequestHandler {
	return helmet({
		contentSecurityPolicy: isDevelopment ? false : { useDefaults: false, directives },
		strictTransportSecurity: isSecure ? { maxAge: 15_552_000 } : false,
		referrerPolicy: { policy: 'same-origin' },
		xFrameOptions: { action: 'deny' },
	});
}
