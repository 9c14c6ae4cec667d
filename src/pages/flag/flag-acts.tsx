import { useMutation } from '@tanstack/react-query';
import type { ReactNode } from 'react';
import { z } from 'zod';
import { plainText } from '#shared/base-contract.ts';
import type { FlagDetail } from '#shared/flag/contract.ts';
import { isOverdue } from '#shared/flag/flag-life.ts';
import { AnswerForm } from '#src/features/flag/answer-form.tsx';
import { DecideForm } from '#src/features/flag/decide-form.tsx';
import { client } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { moment } from '#src/lib/format.ts';
import { useNow } from '#src/lib/now.ts';
import { useMay, useSite } from '#src/lib/session.ts';
import { Button } from '#src/ui/button.tsx';
import { Choice } from '#src/ui/choice.tsx';
import { LongTextField, TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';
import { Notice } from '#src/ui/notice.tsx';

interface FlagActsProps {
	siteId: string;
	flag: FlagDetail;
	onDone: () => Promise<void>;
	camera: ReactNode;
}

/** What this person can do about this flag now; what waits for another is said. */
export function FlagActs({ siteId, flag, onDone, camera }: FlagActsProps) {
	const { timeZone, roles } = useSite();
	const now = useNow();
	const [mayAnswer, mayDecide, mayGrant, mayConsent] = [
		useMay('flag.answer'),
		useMay('flag.decide'),
		useMay('flag.grant'),
		useMay('flag.consent'),
	];
	const isProjectEngineer = roles.includes('project-engineer');
	const about = { siteId, flags: [{ flagId: flag.flagId, version: flag.version }] };
	const act = useMutation({
		mutationFn: (kind: 'putRight' | 'grantTime') => client.flag[kind](about),
		onSuccess: onDone,
	});
	const decider = flag.projectEngineers[0] ?? 'the project engineer';
	const overdue = isOverdue({ state: flag.state, answerBy: flag.answerBy?.getTime() ?? null }, now.getTime());
	const isTooClose = flag.verdict !== 'outside';
	const isAnswerable = (flag.state === 'open' && flag.isWith === 'contractor') || flag.state === 'answered';
	const isWork = flag.state === 'decided' && ['rework', 'repair', 'reject-and-replace'].includes(flag.decision?.kind ?? '');
	const isSettled = flag.state === 'closed' || flag.state === 'lapsed' || flag.state === 'put-right';
	const isDecidable = !isSettled && (flag.state !== 'open' || flag.isWith === 'engineers' || overdue);
	return (
		<div className="flex flex-col gap-4">
			{act.error && <Notice kind="wrong" title={refusalOf(act.error).message} />}
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
					onAnswer={async (answer) => {
						await client.flag.answer({ ...about, answer });
						await onDone();
					}}
					beside={camera}
				/>
			)}
			{mayAnswer && flag.state === 'open' && flag.isWith === 'contractor' && flag.timeAsked === null && (
				<MoreTime
					onAsk={async (until) => {
						await client.flag.askTime({ ...about, until });
						await onDone();
					}}
				/>
			)}
			{flag.timeAsked !== null && (
				<Notice
					kind="note"
					title={`More time is asked for: until ${moment(flag.timeAsked, timeZone, now)}`}
					act={
						mayGrant && (
							<Button weight="act" isBusy={act.isPending} onClick={() => act.mutate('grantTime')}>
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
							<Button weight="act" isBusy={act.isPending} onClick={() => act.mutate('putRight')}>
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
				<Form
					schema={z.object({ isGiven: z.enum(['yes', 'no'], 'Choose one.'), reason: plainText(1000) })}
					values={{ reason: '' }}
					onSubmit={async ({ isGiven, reason }) => {
						await client.flag.consent({ ...about, isGiven: isGiven === 'yes', reason });
						await onDone();
					}}
				>
					<Choice
						name="isGiven"
						legend="The concession needs your consent"
						isRow
						options={[
							{ value: 'yes', label: 'Consent', detail: 'it stays, within these limits' },
							{ value: 'no', label: 'Do not consent', detail: 'it is decided anew' },
						]}
					/>
					<LongTextField name="reason" label="Reason" rows={2} />
					<Submit>Say so</Submit>
				</Form>
			)}
			{!(mayAnswer && (isAnswerable || isWork)) && !(mayDecide && isDecidable) && camera}
		</div>
	);
}

function MoreTime({ onAsk }: { onAsk: (until: Date) => Promise<unknown> }) {
	return (
		<details className="sheet px-4 py-2">
			<summary className="min-h-11 cursor-pointer content-center font-medium">We need more time</summary>
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
