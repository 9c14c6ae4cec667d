import { type ReactNode, useState } from 'react';
import { z } from 'zod';
import type { FlagDetail } from '#shared/flag/contract.ts';
import { isOverdue } from '#shared/flag/flag-life.ts';
import { AnswerForm } from '#src/features/flag/answer-form.tsx';
import { BringPoints } from '#src/features/flag/brought-points.tsx';
import { ConsentForm } from '#src/features/flag/consent-form.tsx';
import { DecideForm } from '#src/features/flag/decide-form.tsx';
import { flagOutbox, flagsOfAct } from '#src/features/flag/flag-outbox.ts';
import { client } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { moment } from '#src/lib/format.ts';
import { useNow } from '#src/lib/now.ts';
import { useMay, useMe, useSite } from '#src/lib/session.ts';
import { useWaiting } from '#src/lib/waiting-acts.ts';
import { Button } from '#src/ui/button.tsx';
import { TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';
import { Notice } from '#src/ui/notice.tsx';

interface FlagActsProps {
	siteId: string;
	flag: FlagDetail;
	onDone: () => Promise<void>;
	camera: ReactNode;
}

/** What this person can do about this flag now; what waits for another is said. Without a line it is kept on this device. */
export function FlagActs({ siteId, flag, onDone, camera }: FlagActsProps) {
	const { timeZone, roles } = useSite();
	const { userId } = useMe();
	const now = useNow();
	const [mayAnswer, mayDecide, mayGrant, mayConsent] = [
		useMay('flag.answer'),
		useMay('flag.decide'),
		useMay('flag.grant'),
		useMay('flag.consent'),
	];
	const isProjectEngineer = roles.includes('project-engineer');
	const about = { siteId, flags: [{ flagId: flag.flagId, version: flag.version }] };
	const { act, busy, fault } = useAct(onDone);
	const waiting = useWaiting(flagOutbox).filter((one) => one.userId === userId && flagsOfAct(one).includes(flag.flagId));
	const kept = waiting.find(({ sender, refusal }) => sender !== 'photo' && refusal === null);
	/** Sent at once or kept; what waited of the same kind for this flag is overtaken by it. */
	const sendOrKeep = async (sender: 'answer' | 'put-right' | 'more-time', input: object, words: string): Promise<void> => {
		const overtaken = waiting.filter((one) => one.sender === sender && flagsOfAct(one).length === 1);
		for (const { actId } of overtaken) await flagOutbox.throwAway(actId);
		const sent = { ...about, ...input, actId: crypto.randomUUID() };
		if ((await flagOutbox.sendOrKeep({ userId, sender, input: sent, words: `${words} to flag ${flag.number}` })) === 'sent') await onDone();
	};
	const decider = flag.projectEngineers[0] ?? 'the project engineer';
	const overdue = isOverdue({ state: flag.state, answerBy: flag.answerBy?.getTime() ?? null }, now.getTime());
	const isTooClose = flag.verdict !== 'outside';
	const isAnswerable = (flag.state === 'open' && flag.isWith === 'contractor') || flag.state === 'answered';
	const isWork = flag.state === 'decided' && ['rework', 'repair', 'reject-and-replace'].includes(flag.decision?.kind ?? '');
	const isSettled = flag.state === 'closed' || flag.state === 'lapsed' || flag.state === 'put-right';
	const isDecidable = !isSettled && (flag.state !== 'open' || flag.isWith === 'engineers' || overdue);
	return (
		<div className="flex flex-col gap-4">
			{fault && <Notice kind="wrong" title={fault} />}
			{kept && (
				<Notice kind="no-line" title={`${kept.words} is kept on this phone`}>
					It goes as soon as there is a line. Until then it can be changed here.
				</Notice>
			)}
			{flag.takeBack && flag.takeBack.until > now && (
				<Notice
					kind="note"
					title={flag.state === 'answered' ? 'Your answer is noted' : 'Your decision is noted'}
					act={
						<Button isBusy={busy} onClick={() => act(() => client.flag.takeBack({ siteId, actId: flag.takeBack?.actId ?? '' }))}>
							Take back
						</Button>
					}
				>
					Nobody is told before {moment(flag.takeBack.until, timeZone, now)}.
				</Notice>
			)}
			{mayAnswer && flag.isWith === 'engineers' && flag.state === 'open' && (
				<Notice kind="note" title="This is being measured again">
					It is too close to call. No answer is needed, and no clock runs.
				</Notice>
			)}
			{mayAnswer && isAnswerable && (
				<AnswerForm
					key={flag.version}
					answer={flag.answer}
					count={1}
					decider={decider}
					ownSurveys={flag.ownSurveys}
					ownPoints={<BringPoints siteId={siteId} flagId={flag.flagId} userId={userId} onBrought={onDone} />}
					onAnswer={(answer) => sendOrKeep('answer', { answer }, 'Your answer')}
					beside={camera}
					isAtFoot
				/>
			)}
			{mayAnswer && flag.state === 'open' && flag.isWith === 'contractor' && flag.timeAsked === null && (
				<MoreTime onAsk={(until) => sendOrKeep('more-time', { until }, 'Your wish for more time')} />
			)}
			{flag.timeAsked !== null && (
				<Notice
					kind="note"
					title={`More time is asked for: until ${moment(flag.timeAsked, timeZone, now)}`}
					act={
						mayGrant && (
							<Button weight="act" isBusy={busy} onClick={() => act(() => client.flag.grantTime(about))}>
								Grant it
							</Button>
						)
					}
				/>
			)}
			{mayAnswer && isWork && (
				<Notice
					kind="note"
					title="Decided: this is to be put right"
					act={
						<>
							{camera}
							<Button weight="act" isBusy={busy} onClick={() => act(() => sendOrKeep('put-right', {}, 'Your word that it is put right'))}>
								Put right, ready to measure
							</Button>
						</>
					}
				>
					It goes on the shoot list, and closes when a published check finds it within.
				</Notice>
			)}
			{mayDecide && overdue && <Notice kind="stale" title="The deadline has passed without an answer; deciding now says so" />}
			{mayDecide && isDecidable && (isProjectEngineer || isTooClose) && (
				<DecideForm
					key={flag.version}
					count={1}
					isTooClose={isTooClose && flag.isWith === 'engineers'}
					maySurveyOnly={!isProjectEngineer}
					worstMm={flag.worstMm}
					needsOwnersConsent={flag.needsOwnersConsent}
					onDecide={async (decision) => {
						await client.flag.decide({ ...about, decision });
						await onDone();
					}}
					beside={!mayAnswer && camera}
				/>
			)}
			{mayDecide && flag.state === 'open' && flag.isWith === 'contractor' && !overdue && (
				<p className="m-0 text-second">{flag.companyName ?? 'The contractor'} still has time to answer; it is decided after that.</p>
			)}
			{mayConsent && flag.isConsentAwaited && (
				<ConsentForm
					count={1}
					onConsent={async (said) => {
						await client.flag.consent({ ...about, ...said });
						await onDone();
					}}
				/>
			)}
			{!(mayAnswer && (isAnswerable || isWork)) && !(mayDecide && isDecidable) && camera}
		</div>
	);
}

/** One act at a time; a refusal is said above. No queue of the query library's: without a line it would hold the act back unsaid. */
function useAct(onDone: () => Promise<void>) {
	const [busy, setBusy] = useState(false);
	const [fault, setFault] = useState<string | null>(null);
	const act = async (call: () => Promise<unknown>): Promise<void> => {
		setBusy(true);
		setFault(null);
		try {
			await call();
			await onDone();
		} catch (error) {
			setFault(refusalOf(error).message);
		} finally {
			setBusy(false);
		}
	};
	return { act: (call: () => Promise<unknown>) => void act(call), busy, fault };
}

function MoreTime({ onAsk }: { onAsk: (until: Date) => Promise<unknown> }) {
	return (
		<details className="sheet px-4 py-2">
			<summary className="min-h-12 cursor-pointer content-center font-medium">We need more time</summary>
			<Form
				schema={z.object({
					until: z
						.string()
						.regex(/^\d{4}-\d\d-\d\d$/, 'Choose a day.')
						.transform((day) => new Date(`${day}T17:00:00`)),
				})}
				values={{ until: '' }}
				onSubmit={async ({ until }) => onAsk(until)}
				className="pb-2"
			>
				<TextField name="until" label="Until" type="date" />
				<Submit>Ask for it</Submit>
			</Form>
		</details>
	);
}
