import { createHash } from 'node:crypto';
import { GetObjectCommand, HeadObjectCommand, NotFound, PutObjectCommand, S3Client } from '@aws-sdk/client-s3';
import type { FileStore, PhotoStore } from './platform.ts';

/** Where photos are kept: with the other files on this disk, or in a bucket. */
export type PhotoSetting = { kind: 'disk' } | { kind: 's3'; bucket: string; endpoint: string | null };

export function photoStoreOf(setting: PhotoSetting, files: FileStore): PhotoStore {
	return setting.kind === 'disk' ? { keep: files.keep, read: files.read } : bucketPhotos(setting);
}

/** Objects by their SHA-256, written once. Credentials and region come from the environment, as the SDK reads them. */
function bucketPhotos({ bucket, endpoint }: Extract<PhotoSetting, { kind: 's3' }>): PhotoStore {
	const client = new S3Client({
		region: process.env.AWS_REGION ?? 'us-east-1',
		...(endpoint === null ? {} : { endpoint, forcePathStyle: true }),
		// Stores that speak the older protocol know none of the newer checksums; the name is the SHA-256.
		requestChecksumCalculation: 'WHEN_REQUIRED',
		responseChecksumValidation: 'WHEN_REQUIRED',
	});
	const keyOf = (sha256: string): string => `photos/${sha256.slice(0, 2)}/${sha256.slice(2)}`;
	return {
		keep: async (bytes) => {
			const kept = { sha256: createHash('sha256').update(bytes).digest('hex'), bytes: bytes.byteLength };
			const place = { Bucket: bucket, Key: keyOf(kept.sha256) };
			const isThere = await client.send(new HeadObjectCommand(place)).then(
				() => true,
				(error: unknown) => {
					if (error instanceof NotFound || (error instanceof Error && error.name === 'NotFound')) return false;
					throw error;
				},
			);
			if (!isThere) await client.send(new PutObjectCommand({ ...place, Body: bytes, ContentLength: bytes.byteLength }));
			return kept;
		},
		read: async (sha256) => {
			const { Body } = await client.send(new GetObjectCommand({ Bucket: bucket, Key: keyOf(sha256) }));
			if (Body === undefined) throw new Error('The bucket gave an object without its bytes.');
			return Body.transformToByteArray();
		},
	};
}
