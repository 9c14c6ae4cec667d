import { useMutation, useQueryClient, useSuspenseQuery } from '@tanstack/react-query';
import { api } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { isoMoment } from '#src/lib/format.ts';
import { Button } from '#src/ui/button.tsx';
import { deviceWords } from './device-words.ts';

/** Where one is signed in, each to be ended. */
export function SessionList() {
	const queries = useQueryClient();
	const { data: sessions } = useSuspenseQuery(api.account.sessions.queryOptions());
	const end = useMutation(
		api.account.endSessions.mutationOptions({ onSettled: () => queries.invalidateQueries({ queryKey: api.account.sessions.key() }) }),
	);
	const zone = Intl.DateTimeFormat().resolvedOptions().timeZone;
	return (
		<>
			{end.error !== null && (
				<p role="alert" className="m-0 mb-2 border-l-[7px] border-l-ink pl-3 font-medium">
					{refusalOf(end.error).message}
				</p>
			)}
			<ul className="m-0 mb-3 list-none border-t border-rule p-0">
				{sessions.map((session) => (
					<li key={session.sessionId} className="flex min-h-14 flex-wrap items-center gap-x-4 border-b border-rule py-2">
						<span className="min-w-0 flex-1 basis-60">
							<span className="block font-strong">{deviceWords(session.userAgent)}</span>
							<span className="block text-second">
								{[
									session.createdAt === null ? 'began some time ago' : `since ${isoMoment(session.createdAt, zone)}`,
									session.address !== null && `from ${session.address}`,
								]
									.filter(Boolean)
									.join(', ')}
							</span>
						</span>
						{session.isThis ? (
							<span className="text-second">this one</span>
						) : (
							<Button
								weight="plain"
								isBusy={end.isPending && end.variables.sessionId === session.sessionId}
								onClick={() => end.mutate({ sessionId: session.sessionId })}
							>
								End it
							</Button>
						)}
					</li>
				))}
			</ul>
			<Button
				whyNot={sessions.length > 1 ? null : 'There is no other session.'}
				isBusy={end.isPending && end.variables.sessionId === null}
				onClick={() => end.mutate({ sessionId: null })}
			>
				End all others
			</Button>
		</>
	);
}
