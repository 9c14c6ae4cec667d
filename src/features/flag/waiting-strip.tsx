import { useQueryClient } from '@tanstack/react-query';
import { useCallback, useEffect, useState } from 'react';
import { api } from '#src/lib/api.ts';
import { counted } from '#src/lib/format.ts';
import { useMe, useSite } from '#src/lib/session.ts';
import { useWaiting, type WaitingAct } from '#src/lib/waiting-acts.ts';
import { Button } from '#src/ui/button.tsx';
import { flagOutbox } from './flag-outbox.ts';

const everyMs = 30_000;

/**
 * What waits on this device, and since when; it is sent when the line is back, when the page is looked at again, and every half minute. What the
 * server refused stays with its reason until it is thrown away. Nothing where nothing waits.
 */
export function WaitingStrip() {
	const queries = useQueryClient();
	const { userId } = useMe();
	const { timeZone } = useSite();
	const acts = useWaiting(flagOutbox).filter((act) => act.userId === userId);
	const [isSending, setIsSending] = useState(false);
	const send = useCallback(async (): Promise<void> => {
		if (flagOutbox.now().every((act) => act.userId !== userId || act.refusal !== null)) return;
		setIsSending(true);
		try {
			if ((await flagOutbox.sendAll(userId)) > 0) await queries.invalidateQueries({ queryKey: api.flag.key() });
		} finally {
			setIsSending(false);
		}
	}, [queries, userId]);
	useEffect(() => {
		const look = (): void => {
			if (document.visibilityState === 'visible') void send();
		};
		// A browser that keeps nothing has nothing waiting either.
		flagOutbox.load().then(look, () => {});
		const timer = setInterval(look, everyMs);
		window.addEventListener('online', look);
		document.addEventListener('visibilitychange', look);
		return () => {
			clearInterval(timer);
			window.removeEventListener('online', look);
			document.removeEventListener('visibilitychange', look);
		};
	}, [send]);
	const waiting = acts.filter(({ refusal }) => refusal === null);
	const refused = acts.filter(({ refusal }) => refusal !== null);
	if (acts.length === 0) return null;
	return (
		<section
			role="status"
			aria-label="What waits on this device"
			className="mx-4 mb-2 rounded-corner border-[1.5px] border-dashed border-second px-4 py-3 tablet:mx-6"
		>
			{waiting.length > 0 && (
				<div className="flex flex-wrap items-center gap-x-4 gap-y-2">
					<p className="m-0 flex-1 basis-60">{waitingWords(waiting, timeZone)}</p>
					<Button isBusy={isSending} onClick={() => void send()}>
						Send now
					</Button>
				</div>
			)}
			{refused.map((act) => (
				<div key={act.actId} className="mt-2 flex flex-wrap items-center gap-x-4 gap-y-2 border-l-[7px] border-l-ink pl-3">
					<p className="m-0 flex-1 basis-60">
						<b>{act.words} was refused.</b> {act.refusal}
					</p>
					<Button onClick={() => void flagOutbox.throwAway(act.actId)}>Throw away</Button>
				</div>
			))}
		</section>
	);
}

/** "No line. 1 answer and 3 photos wait on this phone (14:02).": since the oldest of them. */
export function waitingWords(acts: readonly Pick<WaitingAct, 'sender' | 'keptAt'>[], timeZone: string): string {
	const number = (...senders: string[]): number => acts.filter(({ sender }) => senders.includes(sender)).length;
	const parts = [
		[number('answer'), 'answer'],
		[number('photo'), 'photo'],
		[number('put-right'), 'word that it is put right', 'words that it is put right'],
		[number('more-time'), 'wish for more time', 'wishes for more time'],
	] as const;
	const said = parts.flatMap(([many, one, several]) => (many === 0 ? [] : [counted(many, one, several)]));
	const list = said.length > 1 ? `${said.slice(0, -1).join(', ')} and ${said.at(-1)}` : (said[0] ?? '');
	const since = acts[0]?.keptAt.toLocaleTimeString('en-GB', { timeZone, hour: '2-digit', minute: '2-digit' }) ?? '';
	return `No line. ${list} ${acts.length === 1 ? 'waits' : 'wait'} on this phone (${since}).`;
}
