import { useMutation, useQueryClient, useSuspenseQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { Link } from 'react-router-dom';
import type { HoldPointDetail, PourDetail, ShownHoldPoint } from '#shared/pour/contract.ts';
import { CallForm } from '#src/features/pour/call-form.tsx';
import { holdPointName, holdPointStateWords, pointInHand, pourWord } from '#src/features/pour/pour-words.ts';
import { ReadinessList } from '#src/features/pour/readiness-list.tsx';
import { SignForm } from '#src/features/pour/sign-form.tsx';
import { ShownPourView } from '#src/features/record/shown-pour.tsx';
import { api } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { counted, moment } from '#src/lib/format.ts';
import { useNow } from '#src/lib/now.ts';
import { useAddressId, useSite } from '#src/lib/session.ts';
import { Button } from '#src/ui/button.tsx';
import { Dialog } from '#src/ui/dialog.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { Strip } from '#src/ui/strip.tsx';
import { HoldNotice } from './hold-notice.tsx';
import { PointCard } from './point-card.tsx';
import { pourActs } from './pour-acts.ts';

/** One pour: may it be poured, why or why not, what is signed, and the one thing to do. */
export default function PourPage() {
	const site = useSite();
	const { siteId, timeZone } = site;
	const pourId = useAddressId('pourId');
	const now = useNow();
	const { data: pour } = useSuspenseQuery(api.pour.get.queryOptions({ input: { siteId, pourId } }));
	const point = pointInHand(pour);
	const { data: shown } = useSuspenseQuery(api.pour.shown.queryOptions({ input: { siteId, pourId, point } }));
	const [open, setOpen] = useState<'call' | 'sign' | null>(null);
	const queries = useQueryClient();
	const refresh = () => queries.invalidateQueries({ queryKey: api.pour.key() });
	const submit = useMutation(api.pour.submit.mutationOptions({ onSettled: refresh }));
	const begin = useMutation(api.pour.beginConcreting.mutationOptions({ onSettled: refresh }));
	const end = useMutation(api.pour.endConcreting.mutationOptions({ onSettled: refresh }));
	const acts = pourActs({ site, pour, shown, point });
	const fault = submit.error ?? begin.error ?? end.error;
	const at = (iso: string) => moment(new Date(iso), timeZone, now);
	return (
		<>
			<Strip
				items={[
					pour.companyName,
					counted(pour.elementCount, 'element'),
					pour.plannedAt ? `concrete ${moment(pour.plannedAt, timeZone, now)}` : 'not planned',
					pour.partOf && (
						<Link key="origin" to={`/sites/${siteId}/pours/${pour.partOf.pourId}`} className="text-action underline underline-offset-3">
							rest of pour {pour.partOf.number}
						</Link>
					),
				]}
			/>
			<Headline
				title={`Pour ${pour.number}`}
				acts={
					<>
						{acts.call !== undefined && (
							<Button weight="act" whyNot={acts.call} onClick={() => setOpen('call')}>
								Call the hold point
							</Button>
						)}
						{acts.submit !== undefined && (
							<Button weight="act" whyNot={acts.submit} isBusy={submit.isPending} onClick={() => submit.mutate({ siteId, pourId, point })}>
								Submit
							</Button>
						)}
						{acts.sign !== undefined && (
							<Button weight="act" whyNot={acts.sign} onClick={() => setOpen('sign')}>
								Decide and sign
							</Button>
						)}
						{acts.begin !== undefined && (
							<Button whyNot={acts.begin} isBusy={begin.isPending} onClick={() => begin.mutate({ siteId, pourId, at: new Date() })}>
								Concrete begins
							</Button>
						)}
						{acts.end !== undefined && (
							<Button weight="act" isBusy={end.isPending} onClick={() => end.mutate({ siteId, pourId, at: new Date(), notCast: [] })}>
								Cast, all of it
							</Button>
						)}
					</>
				}
			>
				{headline(pour, shown)}
			</Headline>
			<div className="flex flex-col gap-6">
				{fault && (
					<Notice kind="wrong" title={refusalOf(fault).message}>
						Nothing was changed.
					</Notice>
				)}
				{pour.hold && <HoldNotice siteId={siteId} pourId={pourId} hold={pour.hold} />}
				<section aria-labelledby="readiness">
					<h2 id="readiness" className="m-0 mb-2 text-h2 font-strong">
						{holdPointName(point)}: {shown.readiness.every(({ isGood }) => isGood) ? 'ready' : 'not ready'}
					</h2>
					<ReadinessList sentences={shown.readiness} />
					{shown.shown.carriedOver.map((sentence) => (
						<p key={sentence} className="m-0 mt-2 text-second">
							{sentence}
						</p>
					))}
				</section>
				<div className="grid gap-4 tablet:grid-cols-2">
					{(['before-pour', 'after-pour'] as const).map((kind) => (
						<PointCard key={kind} siteId={siteId} pour={pour} point={pour.points[kind]} />
					))}
				</div>
				<section className="sheet px-5 py-5" aria-labelledby="shown">
					<h2 id="shown" className="m-0 mb-3 text-h2 font-strong">
						What is signed
					</h2>
					<ShownPourView shown={shown.shown} at={at} />
				</section>
			</div>
			{open === 'call' && (
				<Dialog isOpen onClose={() => setOpen(null)} title={`Call pour ${pour.number}`}>
					<CallForm siteId={siteId} pourId={pourId} point={pour.points[point]} onCalled={() => setOpen(null)} />
				</Dialog>
			)}
			{open === 'sign' && (
				<Dialog isOpen onClose={() => setOpen(null)} title={`Pour ${pour.number}, ${pour.name}: what you sign`}>
					<SignDialogBody pour={pour} shown={shown} point={pour.points[point]} siteId={siteId} at={at} onSigned={() => setOpen(null)} />
				</Dialog>
			)}
		</>
	);
}

function headline(pour: PourDetail, { shown }: ShownHoldPoint): string {
	const name = `Pour ${pour.number}, ${pour.name}`;
	const word = pourWord(pour);
	if (word !== 'Not released') return `${name}: ${word.charAt(0).toLowerCase()}${word.slice(1)}`;
	const state = holdPointStateWords(pour.before);
	return shown.isReady ? `${name} is ready, ${state}` : `${name} is not ready`;
}

interface SignDialogBodyProps {
	siteId: string;
	pour: PourDetail;
	point: HoldPointDetail;
	shown: ShownHoldPoint;
	at: (iso: string) => string;
	onSigned: () => void;
}

/** What is signed, whole, above the place where one signs. The hash is that of what stood here when the dialog was opened. */
function SignDialogBody({ siteId, pour, point, shown, at, onSigned }: SignDialogBodyProps) {
	const [kept] = useState(shown);
	return (
		<div className="flex flex-col gap-5">
			<ShownPourView shown={kept.shown} at={at} />
			<SignForm
				siteId={siteId}
				pourId={pour.pourId}
				point={point.kind}
				shownSha256={kept.shownSha256}
				isReady={kept.shown.isReady}
				statement={`Pour ${pour.number}, ${pour.name}, is released ${point.kind === 'before-pour' ? 'for concrete' : 'as cast'} as shown.`}
				onSigned={onSigned}
			/>
		</div>
	);
}
