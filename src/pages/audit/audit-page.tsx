import { useMutation, useSuspenseInfiniteQuery, useSuspenseQuery } from '@tanstack/react-query';
import { roles as allRoles } from '#shared/permissions.ts';
import { auditKinds } from '#shared/record/audit-entry.ts';
import { AuditFilters } from '#src/features/record/audit-filters.tsx';
import { AuditDetail, AuditTable } from '#src/features/record/audit-table.tsx';
import { roleWords } from '#src/features/site/role-words.ts';
import { useAddressState } from '#src/lib/address-state.ts';
import { api, client } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { counted } from '#src/lib/format.ts';
import { saveBlob } from '#src/lib/save-blob.ts';
import { useSite } from '#src/lib/session.ts';
import { Button } from '#src/ui/button.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { Strip } from '#src/ui/strip.tsx';

const idPattern = /^[0-9a-f]{8}-[0-9a-f-]{27}$/;
const wordsOf = (held: readonly string[]) => roleWords(allRoles.filter((role) => held.includes(role)));

/** Everything anybody did on the site, as it was written when it was done. */
export default function AuditPage() {
	const { siteId, timeZone } = useSite();
	const [askedKind, setKind] = useAddressState('act', 'push');
	const [askedUser, setUser] = useAddressState('by', 'push');
	const [thing, setThing] = useAddressState('thing', 'push');
	const [chosenId, choose] = useAddressState('entry');
	const kind = auditKinds.find((one) => one === askedKind) ?? null;
	const userId = askedUser !== null && idPattern.test(askedUser) ? askedUser : null;
	const filter = { siteId, kind, userId, subjectId: thing };
	const { data: people } = useSuspenseQuery(api.site.people.queryOptions({ input: { siteId } }));
	const pages = useSuspenseInfiniteQuery(
		api.record.audit.infiniteOptions({
			input: (olderThan: string | null) => ({ ...filter, olderThan }),
			initialPageParam: null as string | null,
			getNextPageParam: (page) => (page.hasOlder ? (page.entries.at(-1)?.entryId ?? null) : null),
		}),
	);
	const file = useMutation({
		mutationFn: () => client.record.auditCsv(filter),
		onSuccess: (blob) => saveBlob(blob, blob instanceof File ? blob.name : 'audit.csv'),
	});
	const entries = pages.data.pages.flatMap((page) => page.entries);
	const chosen = entries.find(({ entryId }) => entryId === chosenId);
	const isNarrowed = kind !== null || userId !== null || thing !== null;
	return (
		<>
			<Strip items={['written with each act, never changed', 'the database refuses to alter or remove an entry']} />
			<Headline
				title="Record of acts"
				acts={
					<Button onClick={() => file.mutate()} isBusy={file.isPending}>
						As CSV
					</Button>
				}
			>
				{`${counted(entries.length, 'act')}${pages.hasNextPage ? ', and older ones' : ''}${isNarrowed ? ' of those asked for' : ' on this site'}`}
			</Headline>
			{file.error !== null && (
				<p role="alert" className="m-0 mb-3 border-l-[7px] border-l-ink pl-3 font-medium">
					{refusalOf(file.error).message}
				</p>
			)}
			<AuditFilters kind={kind} onKind={setKind} userId={userId} onUser={setUser} people={people.people} />
			{thing !== null && (
				<p className="m-0 mb-3">
					Only what was done to one thing.{' '}
					<Button weight="plain" onClick={() => setThing(null)}>
						Show all things
					</Button>
				</p>
			)}
			{entries.length === 0 ? (
				<Notice kind="empty" title="No such act stands in the record.">
					Ask for other acts, or for everybody’s.
				</Notice>
			) : (
				<>
					<AuditTable entries={entries} timeZone={timeZone} roleWords={wordsOf} chosenId={chosenId} onChoose={choose} />
					{pages.hasNextPage && (
						<div className="mt-3">
							<Button isBusy={pages.isFetchingNextPage} onClick={() => void pages.fetchNextPage()}>
								Older ones
							</Button>
						</div>
					)}
					{chosen && <AuditDetail entry={chosen} timeZone={timeZone} roleWords={wordsOf} onSameThing={setThing} />}
				</>
			)}
		</>
	);
}
