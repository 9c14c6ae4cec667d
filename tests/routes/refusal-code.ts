import { safe } from '@orpc/client';

/** How a call ended: 'done', or the code it was refused with (the command's own where it has one). */
export async function refusalCode(call: Promise<unknown>): Promise<string> {
	const { error } = await safe(call);
	if (error === null) return 'done';
	const refused = error as { code?: string; data?: { code?: string } };
	return refused.data?.code ?? refused.code ?? String(error);
}
