import { useMutation, useQueryClient, useSuspenseQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { useNavigate } from 'react-router-dom';
import type { SitePerson } from '#shared/site/people-contract.ts';
import { CompanyForm } from '#src/features/site/company-form.tsx';
import { DeputyForm } from '#src/features/site/deputy-form.tsx';
import { GiveRoleForm } from '#src/features/site/give-role-form.tsx';
import { InvitationList } from '#src/features/site/invitation-list.tsx';
import { InviteForm } from '#src/features/site/invite-form.tsx';
import { PeopleList, peopleGroups } from '#src/features/site/people-list.tsx';
import { roleWords } from '#src/features/site/role-words.ts';
import { useAddressState } from '#src/lib/address-state.ts';
import { api } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { counted } from '#src/lib/format.ts';
import { useNow } from '#src/lib/now.ts';
import { useMay, useMe, useSite } from '#src/lib/session.ts';
import { Button } from '#src/ui/button.tsx';
import { Dialog } from '#src/ui/dialog.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';

/** Who is on the site, in which role, for which firm; who was invited; and the ways to change it. */
export default function PeoplePage() {
	const site = useSite();
	const me = useMe();
	const now = useNow();
	const { siteId, timeZone, companies } = site;
	const { data } = useSuspenseQuery(api.site.people.queryOptions({ input: { siteId } }));
	const [act, setAct] = useAddressState('act', 'push');
	const mayName = data.nameableRoles.length > 0;
	const leave = () => setAct(null);
	const open = data.invitations.filter(({ state }) => state === 'open').length;
	return (
		<>
			<Headline
				title="People"
				acts={
					act === null && (
						<>
							{data.deputisableRoles.length > 0 && <Button onClick={() => setAct('deputy')}>Name a deputy</Button>}
							<Button weight="act" whyNot={whyNotInvite(mayName, data.isMailOn)} onClick={() => setAct('invite')}>
								Invite
							</Button>
						</>
					)
				}
			>
				{`${counted(data.people.length, 'person', 'people')} on this site${open > 0 ? `, ${open} invited` : ''}`}
			</Headline>
			{act === 'invite' && mayName && (
				<FormSheet label="Invite">
					<InviteForm
						siteId={siteId}
						roles={data.nameableRoles}
						companies={companies.filter(({ companyId }) => data.nameableCompanyIds.includes(companyId))}
						onInvited={leave}
						onLeave={leave}
					/>
				</FormSheet>
			)}
			{act === 'deputy' && data.deputisableRoles.length > 0 && (
				<FormSheet label="Name a deputy">
					<DeputyForm siteId={siteId} roles={data.deputisableRoles} onNamed={leave} onLeave={leave} />
				</FormSheet>
			)}
			{act === 'role' && mayName && (
				<FormSheet label="Give a role">
					<GiveRoleForm
						siteId={siteId}
						people={data.people}
						roles={data.nameableRoles}
						companies={companies.filter(({ companyId }) => data.nameableCompanyIds.includes(companyId))}
						onGiven={leave}
						onLeave={leave}
					/>
				</FormSheet>
			)}
			{act === 'company' && (
				<FormSheet label="Companies">
					<CompanyForm siteId={siteId} companies={companies} onDone={leave} onLeave={leave} />
				</FormSheet>
			)}
			{!data.isMailOn && mayName && (
				<div className="mb-5">
					<Notice kind="note" title="Nobody can be invited from this server yet.">
						No mail service is set. Whoever runs the server sets one; the list below is as it was.
					</Notice>
				</div>
			)}
			{data.invitations.length > 0 && <InvitationList siteId={siteId} invitations={data.invitations} now={now} />}
			<Everybody people={data.people} meId={me.userId} siteId={siteId} timeZone={timeZone} />
			<div className="flex flex-wrap gap-2.5">
				{mayName && act !== 'role' && <Button onClick={() => setAct('role')}>Give a role</Button>}
				<CompanyPress isOpen={act === 'company'} onOpen={() => setAct('company')} />
			</div>
		</>
	);
}

function whyNotInvite(mayName: boolean, isMailOn: boolean): string | null {
	if (!mayName) return 'The project engineer invites; a contractor’s lead its own people; owner’s representatives each other.';
	return isMailOn ? null : 'No mail service is set on this server.';
}

function FormSheet({ label, children }: { label: string; children: React.ReactNode }) {
	return (
		<section aria-label={label} className="sheet mb-6 px-4.5 py-4">
			{children}
		</section>
	);
}

function CompanyPress({ isOpen, onOpen }: { isOpen: boolean; onOpen: () => void }) {
	const may = useMay('company.write');
	if (!may || isOpen) return null;
	return <Button onClick={onOpen}>Add or rename a company</Button>;
}

interface EverybodyProps {
	people: readonly SitePerson[];
	meId: string;
	siteId: string;
	timeZone: string;
}

function Everybody({ people, meId, siteId, timeZone }: EverybodyProps) {
	const queries = useQueryClient();
	const navigate = useNavigate();
	const [asked, ask] = useState<{ person: SitePerson; holding: SitePerson['holdings'][number] } | null>(null);
	const isMe = asked?.person.userId === meId;
	const end = useMutation(
		api.site.endRole.mutationOptions({
			onSuccess: async () => {
				ask(null);
				// Without a role left the site is no longer one's own: its pages would only say so.
				if (isMe) navigate('/sites');
				await queries.invalidateQueries({ queryKey: api.site.key() });
			},
		}),
	);
	const close = () => {
		end.reset();
		ask(null);
	};
	return (
		<>
			<PeopleList groups={peopleGroups(people)} meId={meId} timeZone={timeZone} onEnd={(person, holding) => ask({ person, holding })} />
			<Dialog
				isOpen={asked !== null}
				onClose={close}
				title={isMe ? 'Leave this role?' : `End the role of ${asked?.person.name ?? ''}?`}
				acts={
					<>
						<Button onClick={close}>Leave it</Button>
						<Button
							weight="act"
							isBusy={end.isPending}
							onClick={() => asked && end.mutate({ siteId, membershipId: asked.holding.membershipId })}
						>
							{isMe ? 'Leave' : 'End the role'}
						</Button>
					</>
				}
			>
				<p className="m-0">
					{asked && roleWords([asked.holding.role])}: it ends at once, with its deputies. What was done in it stays on the record. To come
					back takes a new invitation.
				</p>
				{end.error !== null && (
					<p role="alert" className="m-0 mt-3 border-l-[7px] border-l-ink pl-3 font-medium">
						{refusalOf(end.error).message}
					</p>
				)}
			</Dialog>
		</>
	);
}
