import { useQuery, useQueryClient, useSuspenseQuery } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import { flagTitle } from '#shared/flag/flag-name.ts';
import { figureWords, flagHeadline, wayOff, worstPlace } from '#shared/flag/to-come.ts';
import { BroughtList } from '#src/features/flag/brought-points.tsx';
import { FlagHistory } from '#src/features/flag/flag-history.tsx';
import { flagOutbox, photoInputOf } from '#src/features/flag/flag-outbox.ts';
import { CameraButton, FlagPhotos } from '#src/features/flag/flag-photos.tsx';
import { FlagPlanPicture } from '#src/features/flag/flag-plan-picture.tsx';
import { FlagPoints } from '#src/features/flag/flag-points.tsx';
import { deadlineWords, stateWords } from '#src/features/flag/flag-words.ts';
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
	const { userId } = useMe();
	const now = useNow();
	const queries = useQueryClient();
	const { data: flag } = useSuspenseQuery(api.flag.get.queryOptions({ input: { siteId, flagId } }));
	const mayComment = useMay('flag.comment');
	const mayStore = useMay('survey.write');
	const isAsked = mayStore && flag.brought.some((one) => one.surveyId === null);
	const surveys = useQuery({ ...api.survey.list.queryOptions({ input: { siteId } }), enabled: isAsked });
	const deadline = deadlineWords(flag, timeZone, now);
	const figure = figureWords(flag.points);
	const worst = worstPlace(flag.points);
	const way = worst && wayOff(worst.deviation);
	const renew = async (): Promise<void> => {
		await Promise.all([queries.invalidateQueries({ queryKey: api.flag.key() }), queries.invalidateQueries({ queryKey: api.site.key() })]);
	};
	const takePhoto = async (file: File): Promise<void> => {
		const input = await photoInputOf(file, { siteId, flagId, userId });
		if ((await flagOutbox.sendOrKeep({ userId, sender: 'photo', input, words: `A photo for flag ${flag.number}` })) === 'sent')
			await renew();
	};
	const rest = (
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
	);
	return (
		<>
			{deadline !== '' && (
				<p className="m-0 -mx-4 mb-3 bg-ink px-4 py-3.5 text-lead font-strong text-ground max-tablet:-mt-1.5 tablet:mx-0 tablet:rounded-corner">
					Answer {deadline}
				</p>
			)}
			<div className="max-tablet:hidden">{rest}</div>
			<Headline>{flagHeadline(flag.title || flag.mark, flagTitle(flag), flag.points)}</Headline>
			{(figure !== null || flag.plan !== null) && (
				<div className="mb-4 flex items-center gap-5">
					{flag.plan && (
						<FlagPlanPicture
							plan={flag.plan}
							way={way}
							label={`Where ${flag.title || flag.mark} stands${way === null ? '' : ', with an arrow the way it is off'}`}
						/>
					)}
					{figure !== null && (
						<p className="m-0 max-w-[16ch] text-figure leading-[1.12] font-strong tracking-[-0.01em] tablet:max-w-none">{figure}</p>
					)}
				</div>
			)}
			<div className="grid gap-5 cabin:grid-cols-[minmax(0,1fr)_minmax(0,28rem)]">
				<div className="min-w-0">
					<FlagPoints flag={flag} />
					<BroughtList
						siteId={siteId}
						brought={flag.brought}
						timeZone={timeZone}
						onChanged={renew}
						{...(isAsked && surveys.data && { surveys: surveys.data })}
					/>
					<FlagPhotos photos={flag.photos} timeZone={timeZone} />
				</div>
				<div className="min-w-0">
					{flag.state === 'lapsed' && <Notice kind="note" title={flag.lapsedWords ?? 'It has lapsed'} />}
					<FlagActs siteId={siteId} flag={flag} onDone={renew} camera={mayComment && <CameraButton onTaken={takePhoto} />} />
					<div className="mt-3 tablet:hidden">{rest}</div>
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
