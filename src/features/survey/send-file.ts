import { useState } from 'react';
import { type UploadWish, uploadFile } from '#src/lib/upload.ts';

/** Sends a file and says how far it is; what was sent of a broken upload is kept by the server. */
export function useSendFile(siteId: string, userId: string, purpose: UploadWish['purpose']) {
	const [sent, setSent] = useState<{ done: number; of: number } | null>(null);
	const send = async (file: File): Promise<string> => {
		setSent({ done: 0, of: file.size });
		try {
			return await uploadFile({ file, siteId, userId, purpose, onProgress: (done, of) => setSent({ done, of }) });
		} finally {
			setSent(null);
		}
	};
	return { sent, send };
}
