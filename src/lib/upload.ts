import { type PreviousUpload, Upload } from 'tus-js-client';

/** What an upload needs to be resumed as itself and by nobody else. */
export interface UploadWish {
	file: File;
	siteId: string;
	userId: string;
	/** What it is for: a half-sent survey is never taken up again as a model. */
	purpose: 'model' | 'control' | 'survey' | 'photo' | 'own-points';
	/** Sent and whole size, bytes. */
	onProgress?: (sentBytes: number, wholeBytes: number) => void;
	/** Aborting keeps what was sent, so that the same file goes on from there. */
	signal?: AbortSignal;
}

/** Why a file did not arrive, in words; what was sent is kept and taken up again. */
export class UploadFault extends Error {
	/** HTTP status where the server answered. */
	readonly status: number | null;
	constructor(message: string, status: number | null) {
		super(message);
		this.name = 'UploadFault';
		this.status = status;
	}
}

/** Five tries over a minute, then the person decides. */
const retryDelaysMs = [0, 1000, 3000, 10_000, 20_000, 30_000];
const chunkBytes = 8_000_000;

function fingerprintOf({ file, siteId, userId, purpose }: UploadWish): string {
	return ['batterboard', siteId, purpose, userId, file.name, file.size, file.lastModified].join('|');
}

/** The last part of the upload's address is its id. */
function idOf(url: string): string {
	return new URL(url, window.location.origin).pathname.split('/').at(-1) ?? '';
}

/**
 * Sends a file in pieces, going on where an earlier try stopped, and gives the upload's id for the call that takes it in.
 * Throws UploadFault with what happened and what to do; throws the signal's reason when aborted.
 */
export async function uploadFile(wish: UploadWish): Promise<string> {
	const { file, siteId, signal, onProgress } = wish;
	signal?.throwIfAborted();
	return new Promise<string>((resolve, reject) => {
		const upload = new Upload(file, {
			endpoint: '/api/uploads',
			chunkSize: chunkBytes,
			retryDelays: retryDelaysMs,
			// "filename" is the name that tus servers look for.
			metadata: { siteId, filename: file.name },
			fingerprint: async () => fingerprintOf(wish),
			removeFingerprintOnSuccess: true,
			onProgress: (sent, whole) => onProgress?.(sent, whole),
			onError: (error) => {
				signal?.removeEventListener('abort', stop);
				reject(faultOf(error, file.name));
			},
			onSuccess: () => {
				signal?.removeEventListener('abort', stop);
				resolve(idOf(upload.url ?? ''));
			},
		});
		function stop(): void {
			upload.abort();
			reject(signal?.reason);
		}
		signal?.addEventListener('abort', stop, { once: true });
		upload
			.findPreviousUploads()
			.then((previous) => {
				if (signal?.aborted) return;
				const newest = newestOf(previous);
				if (newest) upload.resumeFromPreviousUpload(newest);
				upload.start();
			})
			.catch(reject);
	});
}

function newestOf(previous: readonly PreviousUpload[]): PreviousUpload | undefined {
	return [...previous].sort((a, b) => Date.parse(b.creationTime) - Date.parse(a.creationTime))[0];
}

function faultOf(error: Error, fileName: string): UploadFault {
	const response = 'originalResponse' in error ? (error.originalResponse as { getStatus(): number; getBody(): string } | null) : null;
	const status = response?.getStatus() ?? null;
	if (status === 401) return new UploadFault('You are signed out. Sign in again; the part that was sent is kept.', status);
	if (status === 403) return new UploadFault('Your role on this site does not allow this upload.', status);
	if (status === 413) return new UploadFault(`${fileName} is larger than this server takes. Nothing of it was kept.`, status);
	const said = response?.getBody().trim();
	if (status !== null && status < 500 && said && said.length < 300) return new UploadFault(said, status);
	return new UploadFault(
		`The line broke while ${fileName} was sent. The part that arrived is kept: choose the file again to go on.`,
		status,
	);
}
