import type { KeptFile, Platform } from './platform.ts';
import { Conflict } from './refuse.ts';
import type { TakenUpload } from './uploads.ts';

/** Moves a taken upload's bytes into the store. CONFLICT where another command moved them a moment ago. */
export async function keepUpload(platform: Pick<Platform, 'files'>, upload: TakenUpload): Promise<KeptFile> {
	try {
		return await platform.files.keepFrom(upload.path);
	} catch (error) {
		if (error instanceof Error && 'code' in error && error.code === 'ENOENT') {
			throw new Conflict('This file was just put to use elsewhere.');
		}
		throw error;
	}
}
