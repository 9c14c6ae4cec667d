import { useQueryClient, useSuspenseQuery } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import { FlagHistory } from '#src/features/flag/flag-history.tsx';
import { CameraButton, FlagPhotos } from '#src/features/flag/flag-photos.tsx';
import { FlagPoints } from '#src/features/flag/flag-points.tsx';
import { deadlineWords, flagTitle, stateWords } from '#src/features/flag/flag-words.ts';
import { api, client } from '#src/lib/api.ts';
import { useNow } from '#src/lib/now.ts';
import { useAddressId, useMay, useMe, useSite } from '#src/lib/session.ts';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { Strip } from '#src/ui/strip.tsx';
import { FlagActs } from './flag-acts.tsx';

/** One flag: until when, what is off and which way, then what this person can do about it. */
export default function FlagPage() {
	const siteId = useAddressId('siteId');
	const flagId = useAddressId('flagId');
	const { timeZone } = useSite();
	const me = useMe();
	const now = useNow();
	const queries = useQueryClient();
	const { data: flag } = useSuspenseQuery(api.flag.get.queryOptions({ input: { siteId, flagId } }));
	const mayComment = useMay('flag.comment');
	const deadline = deadlineWords(flag, timeZone, now);
	const renew = async (): Promise<void> => {
		await Promise.all([queries.invalidateQueries({ queryKey: api.flag.key() }), queries.invalidateQueries({ queryKey: api.site.key() })]);
	};
	return (
		<>
			{deadline !== '' && (
				<p className="m-0 -mx-4 mb-3 bg-ink px-4 py-3 font-strong text-ground tablet:mx-0 tablet:rounded-corner">Answer {deadline}</p>
			)}
			<Strip
				items={[
					`flag ${flag.number}`,
					flag.pours.length > 0 && `pour ${flag.pours.map(({ number }) => number).join(', ')}`,
					flag.companyName,
					<Link key="check" to={`/sites/${siteId}/checks/${flag.checkId}`}>
						its check
					</Link>,
					flag.round > 1 && `opened ${flag.round} times`,
					<b key="state">{stateWords(flag, now)}</b>,
				]}
			/>
			<Headline>{flagTitle(flag)}</Headline>
			<div className="grid gap-5 cabin:grid-cols-[minmax(0,1fr)_minmax(0,28rem)]">
				<div className="min-w-0">
					<FlagPoints flag={flag} />
					<FlagPhotos photos={flag.photos} timeZone={timeZone} />
				</div>
				<div className="min-w-0">
					{flag.state === 'lapsed' && <Notice kind="note" title={flag.lapsedWords ?? 'It has lapsed'} />}
					<FlagActs
						siteId={siteId}
						flag={flag}
						onDone={renew}
						camera={
							mayComment && (
								<CameraButton
									siteId={siteId}
									userId={me.userId}
									onTaken={async (uploadId) => {
										await client.flag.addPhoto({ siteId, flagId, uploadId });
										await renew();
									}}
								/>
							)
						}
					/>
					<FlagHistory
						events={flag.history}
						timeZone={timeZone}
						{...(mayComment && {
							onSay: async (text: string) => {
								await client.flag.comment({ siteId, flagId, text });
								await renew();
							},
						})}
					/>
				</div>
			</div>
		</>
	);
}
