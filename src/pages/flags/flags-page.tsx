import { useSuspenseQuery } from '@tanstack/react-query';
import { useMemo, useState } from 'react';
import type { FlagSummary } from '#shared/flag/contract.ts';
import { FlagTable } from '#src/features/flag/flag-table.tsx';
import { type FlagGroup, flagGroups, groupOf } from '#src/features/flag/flag-words.ts';
import { useAddressState } from '#src/lib/address-state.ts';
import { api } from '#src/lib/api.ts';
import { count, counted, moment } from '#src/lib/format.ts';
import { useNow } from '#src/lib/now.ts';
import { useAddressId, useMay, useSite } from '#src/lib/session.ts';
import { ButtonLink } from '#src/ui/button.tsx';
import { Chip } from '#src/ui/chip.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { Strip } from '#src/ui/strip.tsx';
import { BulkActs } from './bulk-acts.tsx';

/** The site's flags, a contractor's own first by deadline; several are answered or decided at once. */
export default function FlagsPage() {
	const siteId = useAddressId('siteId');
	const site = useSite();
	const now = useNow();
	const isContractor = useMay('flag.answer');
	const mayConsent = useMay('flag.consent');
	const { data: flags } = useSuspenseQuery(api.flag.list.queryOptions({ input: { siteId } }));
	const [groupWord, setGroup] = useAddressState('show');
	const group = flagGroups.find((one) => one === groupWord) ?? null;
	const [chosen, setChosen] = useState<ReadonlySet<string>>(new Set());
	const grouped = useMemo(() => new Map(flags.map((flag) => [flag.flagId, groupOf(flag, now)])), [flags, now]);
	const shown = useMemo(
		() =>
			flags.filter(({ flagId }) => {
				const own = grouped.get(flagId);
				return group === null ? own !== 'settled' : own === group;
			}),
		[flags, grouped, group],
	);
	const counts = new Map<FlagGroup, number>();
	for (const own of grouped.values()) counts.set(own, (counts.get(own) ?? 0) + 1);
	const picked = shown.filter(({ flagId }) => chosen.has(flagId));
	return (
		<>
			<Strip items={[counted(flags.length, 'flag'), counts.has('settled') && `${counts.get('settled')} settled`]} />
			<Headline title="Flags" acts={<ButtonLink to={`/sites/${siteId}/shoot-list`}>Shoot list</ButtonLink>}>
				{headlineOf(flags, counts, { isContractor, mayConsent }, site.timeZone, now)}
			</Headline>
			{flags.length === 0 ? (
				<Notice kind="empty" title="No published check has found anything outside its limits">
					Flags are raised when a site engineer publishes a check.
				</Notice>
			) : (
				<>
					<div className="my-2 flex flex-wrap gap-2 max-tablet:-mx-4 max-tablet:flex-nowrap max-tablet:overflow-x-auto max-tablet:px-4 max-tablet:py-1 max-tablet:[&>*]:shrink-0">
						{flagGroups
							.filter((one) => counts.has(one))
							.map((one) => (
								<Chip key={one} isOn={group === one} onChange={(isOn) => setGroup(isOn ? one : null)}>
									{one} {count(counts.get(one) ?? 0)}
								</Chip>
							))}
					</div>
					<BulkActs siteId={siteId} flags={picked} onDone={() => setChosen(new Set())} />
					<FlagTable
						siteId={siteId}
						flags={shown}
						chosen={chosen}
						onChoose={setChosen}
						timeZone={site.timeZone}
						now={now}
						empty={
							<Notice kind="empty" title="Nothing waits here">
								Choose another of the groups above.
							</Notice>
						}
					/>
				</>
			)}
		</>
	);
}

function headlineOf(
	flags: readonly FlagSummary[],
	counts: ReadonlyMap<FlagGroup, number>,
	{ isContractor, mayConsent }: { isContractor: boolean; mayConsent: boolean },
	timeZone: string,
	now: Date,
): string {
	if (flags.length === 0) return 'No flags';
	const [toAnswer, toDecide] = [counts.get('to answer') ?? 0, counts.get('to decide') ?? 0];
	const toConsent = counts.get('to consent') ?? 0;
	if (mayConsent && toConsent > 0) return `${counted(toConsent, 'concession')} ${toConsent === 1 ? 'waits' : 'wait'} for your consent`;
	if (isContractor) {
		const [first] = flags.filter((flag) => groupOf(flag, now) === 'to answer');
		if (first?.answerBy) return `${counted(toAnswer, 'flag')} to answer, the first by ${moment(first.answerBy, timeZone, now)}`;
		return toDecide > 0 ? `Nothing to answer; ${counted(toDecide, 'flag')} with the project engineer` : 'Nothing to answer';
	}
	const parts = [
		toDecide > 0 ? `${counted(toDecide, 'flag')} to decide` : null,
		toAnswer > 0 ? `${toAnswer} with contractors` : null,
		counts.has('to measure') ? `${counts.get('to measure')} to measure` : null,
	].filter((part) => part !== null);
	return parts.length === 0 ? 'All flags are settled or in hand' : parts.join(', ');
}
