import { useMutation, useQueryClient } from '@tanstack/react-query';
import type { PourDetail } from '#shared/pour/contract.ts';
import { api } from '#src/lib/api.ts';
import { moment } from '#src/lib/format.ts';
import { useNow } from '#src/lib/now.ts';
import { useSite } from '#src/lib/session.ts';
import { Button } from '#src/ui/button.tsx';
import { Notice } from '#src/ui/notice.tsx';

interface HoldNoticeProps {
	siteId: string;
	pourId: string;
	hold: NonNullable<PourDetail['hold']>;
}

/** "Hold: do not pour", with who has seen it, and the press by which one says so. */
export function HoldNotice({ siteId, pourId, hold }: HoldNoticeProps) {
	const { timeZone } = useSite();
	const now = useNow();
	const queries = useQueryClient();
	const see = useMutation(api.pour.seeHold.mutationOptions({ onSettled: () => queries.invalidateQueries({ queryKey: api.pour.key() }) }));
	return (
		<Notice
			kind="wrong"
			title="Hold: do not pour"
			act={
				!hold.isSeenByYou && (
					<Button weight="act" isBusy={see.isPending} onClick={() => see.mutate({ siteId, pourId })}>
						Seen
					</Button>
				)
			}
		>
			<span className="text-ink">{hold.reasons.join(' ')}</span> Since {moment(hold.raisedAt, timeZone, now)}.{' '}
			{hold.seen.length === 0
				? 'Nobody has said yet that they saw it.'
				: `Seen by ${hold.seen.map(({ name, at }) => `${name} ${moment(at, timeZone, now)}`).join(', ')}.`}
		</Notice>
	);
}
