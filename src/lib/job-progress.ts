import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { useEffect, useRef } from 'react';
import type { JobProgress } from '#shared/job/contract.ts';
import { api } from './api.ts';

/** True once nothing more will come of it. */
export function hasEnded(job: Pick<JobProgress, 'state'>): boolean {
	return job.state === 'done' || job.state === 'failed' || job.state === 'cancelled';
}

/**
 * Follows a job until it ends, also over a broken line, and can ask it to stop. Null jobId: nothing is followed.
 * `onEnd` is called once per job with its last word; invalidate there what the job has made.
 */
export function useJob(siteId: string, jobId: string | null, onEnd?: (job: JobProgress) => void) {
	const queries = useQueryClient();
	const follow = useQuery(
		api.job.follow.experimental_liveOptions({
			input: { siteId, jobId: jobId ?? '' },
			enabled: jobId !== null,
			retry: 20,
			retryDelay: (tries) => Math.min(1000 * 2 ** tries, 15_000),
			staleTime: Number.POSITIVE_INFINITY,
			gcTime: 0,
		}),
	);
	const cancel = useMutation(
		api.job.cancel.mutationOptions({ onSuccess: () => queries.invalidateQueries({ queryKey: api.job.get.key() }) }),
	);
	const job = follow.data ?? null;
	const told = useRef<string | null>(null);
	const tell = useRef(onEnd);
	useEffect(() => {
		tell.current = onEnd;
	});
	useEffect(() => {
		if (!job || !hasEnded(job) || told.current === job.jobId) return;
		told.current = job.jobId;
		tell.current?.(job);
	}, [job]);
	return {
		job,
		error: follow.error,
		isCancelling: cancel.isPending,
		cancel: () => (jobId === null ? undefined : cancel.mutate({ siteId, jobId })),
	};
}
