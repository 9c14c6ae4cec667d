import { useQueryClient } from '@tanstack/react-query';
import type { ReactNode } from 'react';
import { Link } from 'react-router-dom';
import type { RevisionSummary } from '#shared/model/contract.ts';
import { noLengthUnit } from '#shared/model/ifc-units.ts';
import { api } from '#src/lib/api.ts';
import { bytes, counted, isoMoment } from '#src/lib/format.ts';
import { useJob } from '#src/lib/job-progress.ts';
import { Notice } from '#src/ui/notice.tsx';
import { Progress } from '#src/ui/progress.tsx';

interface RevisionRowProps {
	siteId: string;
	revision: RevisionSummary;
	isNewest: boolean;
	timeZone: string;
	/** The job of a reading may be looked at; a contractor sees the state alone. */
	mayFollow: boolean;
	/** What helps where the file names no length unit. */
	act?: ReactNode;
}

/** One revision: read and ready, being read, or refused with its reason. */
export function RevisionRow({ siteId, revision, isNewest, timeZone, mayFollow, act }: RevisionRowProps) {
	const about = `${revision.fileName}, ${bytes(revision.fileBytes)}, ${isoMoment(revision.uploadedAt, timeZone)}, ${revision.uploadedBy}`;
	if (revision.state === 'reading')
		return mayFollow && revision.jobId ? (
			<Reading siteId={siteId} jobId={revision.jobId} about={about} number={revision.number} />
		) : (
			<Notice kind="note" title={`Revision ${revision.number} is being read`}>
				{about}
			</Notice>
		);
	if (revision.state !== 'ready')
		return (
			<Notice
				kind={revision.state === 'failed' ? 'wrong' : 'note'}
				title={`Revision ${revision.number} was ${revision.state === 'failed' ? 'not read' : 'stopped'}`}
				act={revision.reason === noLengthUnit && act}
			>
				{revision.reason} {about}
			</Notice>
		);
	return (
		<div className={`sheet flex flex-wrap items-center gap-x-6 gap-y-1 px-4.5 py-3.5 ${isNewest ? 'border-ink' : ''}`}>
			<Link
				to={`/sites/${siteId}/model/${revision.revisionId}`}
				className="inline-flex min-h-11 min-w-36 items-center text-lead font-strong text-action underline underline-offset-3"
			>
				Revision {revision.number}
				{isNewest ? ', newest' : ''}
			</Link>
			<span className="min-w-0 flex-1 basis-64">
				<span className="block">
					{counted(revision.elementCount, 'element')}, {counted(revision.checkpointCount, 'checkpoint')}
				</span>
				<span className="block text-second">{about}</span>
			</span>
			<span className="font-mono text-small break-all text-second" title="SHA-256 of the file">
				{revision.fileSha256.slice(0, 16)}…
			</span>
		</div>
	);
}

function Reading({ siteId, jobId, about, number }: { siteId: string; jobId: string; about: string; number: number }) {
	const queries = useQueryClient();
	const { job, cancel, isCancelling } = useJob(siteId, jobId, () => {
		for (const queryKey of [api.model.key(), api.site.key()]) queries.invalidateQueries({ queryKey });
	});
	return (
		<Progress
			doing={`Revision ${number}: ${job?.doing ?? 'waiting its turn'}`}
			done={job?.done ?? 0}
			of={job?.of ?? 0}
			onCancel={cancel}
			isCancelling={isCancelling}
			note={`${about}. You can leave this page; it goes on.`}
		/>
	);
}
