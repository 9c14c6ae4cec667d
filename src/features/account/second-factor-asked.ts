import { ORPCError } from '@orpc/client';

/** The half-done sign-in that a second code ends; null for any other error. */
export function stepTokenOf(error: unknown): string | null {
	if (!(error instanceof ORPCError) || error.code !== 'SECOND_FACTOR') return null;
	const { data } = error as { data?: { stepToken?: unknown } };
	return typeof data?.stepToken === 'string' ? data.stepToken : null;
}
