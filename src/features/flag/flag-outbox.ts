import { ORPCError } from '@orpc/client';
import { type Client, client } from '#src/lib/api.ts';
import { errorCode } from '#src/lib/api-error.ts';
import { deviceShelf, waitingActs } from '#src/lib/waiting-acts.ts';

export type AnswerInput = Parameters<Client['flag']['answer']>[0];
export type PutRightInput = Parameters<Client['flag']['putRight']>[0];
export type MoreTimeInput = Parameters<Client['flag']['askTime']>[0];

/** A photo with its bytes copied in: what the phone's own library holds may be gone by the time it is sent. */
export interface PhotoInput {
	siteId: string;
	flagId: string;
	userId: string;
	name: string;
	type: string;
	takenAt: number;
	bytes: ArrayBuffer;
}

/** The photo as it is kept until it is sent. */
export async function photoInputOf(file: File, about: Pick<PhotoInput, 'siteId' | 'flagId' | 'userId'>): Promise<PhotoInput> {
	return { ...about, name: file.name, type: file.type, takenAt: file.lastModified, bytes: await file.arrayBuffer() };
}

async function sendPhoto({ siteId, flagId, userId, name, type, takenAt, bytes }: PhotoInput): Promise<void> {
	// The upload tries for a minute by itself: without any line that minute is waited for nothing.
	if (!navigator.onLine) throw new TypeError('Failed to fetch: this device says it has no line.');
	const { UploadFault, uploadFile } = await import('#src/lib/upload.ts');
	const file = new File([bytes], name, { type, lastModified: takenAt });
	try {
		const uploadId = await uploadFile({ file, siteId, userId, purpose: 'photo' });
		await client.flag.addPhoto({ siteId, flagId, uploadId });
	} catch (error) {
		// It arrived before; only its receipt was lost.
		if (errorCode(error) === 'REFUSED' && error instanceof ORPCError && codeOf(error.data) === 'photo-there') return;
		if (!(error instanceof UploadFault)) throw error;
		if (error.status === null) throw new TypeError(`Failed to fetch: ${error.message}`);
		throw new ORPCError(error.status === 401 ? 'UNAUTHORIZED' : 'REFUSED', { status: error.status, message: error.message });
	}
}

function codeOf(data: unknown): unknown {
	return typeof data === 'object' && data !== null && 'code' in data ? data.code : null;
}

/** What was done to flags on this device without a line. The server takes an act of the same id once. */
export const flagOutbox = waitingActs({
	shelf: () => deviceShelf(),
	senders: {
		answer: (input) => client.flag.answer(input as AnswerInput),
		'put-right': (input) => client.flag.putRight(input as PutRightInput),
		'more-time': (input) => client.flag.askTime(input as MoreTimeInput),
		photo: (input) => sendPhoto(input as PhotoInput),
	},
	newId: () => crypto.randomUUID(),
	clock: () => new Date(),
});

/** Which flags a waiting act is on. */
export function flagsOfAct({ sender, input }: { sender: string; input: unknown }): string[] {
	if (sender === 'photo') return [(input as PhotoInput).flagId];
	return (input as AnswerInput).flags.map(({ flagId }) => flagId);
}
