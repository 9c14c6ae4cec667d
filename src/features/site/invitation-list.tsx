import { useMutation, useQueryClient } from '@tanstack/react-query';
import type { SiteInvitation } from '#shared/site/people-contract.ts';
import { api } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { distanceInTime } from '#src/lib/format.ts';
import { Button } from '#src/ui/button.tsx';
import { roleWords } from './role-words.ts';

interface InvitationListProps {
	siteId: string;
	invitations: readonly SiteInvitation[];
	now: Date;
}

/** Who was invited and has not come yet: until when, and the press that sends it again. */
export function InvitationList({ siteId, invitations, now }: InvitationListProps) {
	const queries = useQueryClient();
	const refresh = { onSettled: () => queries.invalidateQueries({ queryKey: api.site.people.key() }) };
	const again = useMutation(api.site.sendAgain.mutationOptions(refresh));
	const withdraw = useMutation(api.site.withdrawInvitation.mutationOptions(refresh));
	const failed = again.error ?? withdraw.error;
	return (
		<section aria-label="Invited" className="mb-5">
			<h2 className="m-0 mb-1 text-h2 font-strong">Invited, not here yet</h2>
			{failed !== null && (
				<p role="alert" className="m-0 mb-2 border-l-[7px] border-l-ink pl-3 font-medium">
					{refusalOf(failed).message}
				</p>
			)}
			<ul className="m-0 list-none border-t border-rule p-0">
				{invitations.map((one) => {
					const input = { siteId, invitationId: one.invitationId };
					return (
						<li key={one.invitationId} className="flex flex-wrap items-center gap-x-4 border-b border-rule py-2">
							<span className="min-w-0 basis-full tablet:basis-72">
								<span className="block font-strong break-all">{one.email}</span>
								<span className="block text-second">{stateWords(one, now)}</span>
							</span>
							<span className="min-w-0 flex-1 basis-60">
								{[
									roleWords(one.roles),
									one.companyName,
									one.deputyForName && `in the stead of ${one.deputyForName}`,
									`by ${one.invitedByName}`,
								]
									.filter(Boolean)
									.join(', ')}
							</span>
							<span className="flex flex-wrap gap-2.5">
								<Button isBusy={again.isPending && again.variables.invitationId === one.invitationId} onClick={() => again.mutate(input)}>
									Send again
									<span className="sr-only"> to {one.email}</span>
								</Button>
								<Button
									weight="plain"
									isBusy={withdraw.isPending && withdraw.variables.invitationId === one.invitationId}
									onClick={() => withdraw.mutate(input)}
								>
									Withdraw
									<span className="sr-only"> the invitation of {one.email}</span>
								</Button>
							</span>
						</li>
					);
				})}
			</ul>
		</section>
	);
}

function stateWords({ state, sentAt, expiresAt }: SiteInvitation, now: Date): string {
	if (state === 'declined') return 'said: not me';
	if (state === 'over') return `its time was over ${distanceInTime(expiresAt, now)}`;
	return `sent ${distanceInTime(sentAt, now)}, holds ${distanceInTime(expiresAt, now).replace('in ', 'for ')}`;
}
