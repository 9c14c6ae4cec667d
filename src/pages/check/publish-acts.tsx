import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { useFormContext } from 'react-hook-form';
import { z } from 'zod';
import type { CheckDetail, PublishPlan } from '#shared/check/contract.ts';
import { ReasonDialog } from '#src/features/fit/reason-dialog.tsx';
import { api, client } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { counted, moment } from '#src/lib/format.ts';
import { useNow } from '#src/lib/now.ts';
import { useMay, useSite } from '#src/lib/session.ts';
import { Button } from '#src/ui/button.tsx';
import { Dialog } from '#src/ui/dialog.tsx';
import { TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';
import { LoadingLines, Notice } from '#src/ui/notice.tsx';
import { TakeBack } from './take-back.tsx';

/** A trial is published, a published check withdrawn: by a site engineer, with what it does said before the press. */
export function PublishActs({ check, siteId }: { check: CheckDetail; siteId: string }) {
	const mayPublish = useMay('check.publish');
	const [asked, ask] = useState<'publish' | 'withdraw' | null>(null);
	const queries = useQueryClient();
	if (!mayPublish || (check.state !== 'trial' && check.state !== 'published')) return null;
	const renew = (): Promise<void> => {
		ask(null);
		return queries.invalidateQueries();
	};
	return (
		<>
			{check.state === 'trial' ? (
				<Button weight="act" onClick={() => ask('publish')}>
					Publish …
				</Button>
			) : (
				<>
					{check.takeBackUntil && <TakeBack siteId={siteId} checkId={check.checkId} until={check.takeBackUntil} onDone={renew} />}
					<Button onClick={() => ask('withdraw')}>Withdraw …</Button>
				</>
			)}
			{asked === 'publish' && <PublishDialog check={check} siteId={siteId} onClose={() => ask(null)} onDone={renew} />}
			{asked === 'withdraw' && (
				<ReasonDialog
					title={`Withdraw check ${check.number}`}
					hint="Its flags lapse. Each person concerned is told once, with this reason. It stays on the record and cannot be published again."
					act="Withdraw the check"
					usual={['A target was mislabelled.', 'The prism constant was wrong.', 'Measured on the wrong day.']}
					longest={500}
					onSay={async (reason) => {
						await client.check.withdraw({ siteId, checkId: check.checkId, reason });
						await renew();
					}}
					onClose={() => ask(null)}
				/>
			)}
		</>
	);
}

interface PublishDialogProps {
	check: CheckDetail;
	siteId: string;
	onClose: () => void;
	onDone: () => Promise<void>;
}

function PublishDialog({ check, siteId, onClose, onDone }: PublishDialogProps) {
	const input = { siteId, checkId: check.checkId };
	// Asked anew at each opening: what is shown is what is done.
	const { data: plan, error } = useQuery({ ...api.check.publishPlan.queryOptions({ input }), gcTime: 0, staleTime: 0 });
	return (
		<Dialog isOpen onClose={onClose} title={`Publish check ${check.number}`}>
			{error && <Notice kind="wrong" title={refusalOf(error).message} />}
			{!plan && !error && <LoadingLines what="What it would do" rows={3} />}
			{plan && <PublishForm plan={plan} input={input} onClose={onClose} onDone={onDone} />}
		</Dialog>
	);
}

/** "2026-12-05T17:00" as a datetime field writes it, by the device's clock. */
function localText(at: Date): string {
	const two = (value: number): string => String(value).padStart(2, '0');
	return `${at.getFullYear()}-${two(at.getMonth() + 1)}-${two(at.getDate())}T${two(at.getHours())}:${two(at.getMinutes())}`;
}

interface PublishFormProps extends Omit<PublishDialogProps, 'check' | 'siteId'> {
	plan: PublishPlan;
	input: { siteId: string; checkId: string };
}

function PublishForm({ plan, input, onClose, onDone }: PublishFormProps) {
	const { timeZone } = useSite();
	const now = useNow();
	const flagged = plan.companies.reduce((sum, { flags }) => sum + flags, 0);
	if (plan.refusal !== null) return <Notice kind="stale" title={plan.refusal} />;
	return (
		<div className="flex flex-col gap-3">
			{plan.commonShift.map((finding) => (
				<Notice key={finding.message} kind="stale" title={finding.message} />
			))}
			{plan.uncheckedSetups.length > 0 && (
				<Notice kind="note" title={`Nobody has checked the fit of ${plan.uncheckedSetups.join(', ')} yet`}>
					It can be published, and every page that rests on it says so; no pour is ready on it.
				</Notice>
			)}
			<ul className="m-0 pl-5">
				{plan.companies.map(({ companyId, name, flags }) => (
					<li key={companyId ?? 'none'}>
						<b>{counted(flags, 'flag')}</b> to {name ?? 'the engineers: in no pour'}
					</li>
				))}
				{plan.toEngineers > 0 && <li>{counted(plan.toEngineers, 'flag')} too close to call, to the engineers first, without a clock</li>}
				{plan.closes > 0 && <li>{counted(plan.closes, 'flag')} close: measured within</li>}
				{plan.lapses > 0 && <li>{counted(plan.lapses, 'flag')} lapse</li>}
				{flagged + plan.toEngineers + plan.closes + plan.lapses === 0 && <li>No flag is raised.</li>}
			</ul>
			<Form
				schema={z.object({
					answerBy: z
						.string()
						.regex(/^\d{4}-\d\d-\d\dT\d\d:\d\d/, 'Write a day and an hour.')
						.transform((text) => new Date(text)),
				})}
				values={{ answerBy: localText(plan.answerBy) }}
				onSubmit={async ({ answerBy }) => {
					await client.check.publish({ ...input, answerBy, planSha256: plan.planSha256 });
					await onDone();
				}}
			>
				<TextField
					name="answerBy"
					type="datetime-local"
					label="Answer by"
					hint={`By the site’s calendar: ${moment(plan.answerBy, timeZone, now)}.`}
				/>
				<Submit
					beside={<Button onClick={onClose}>Not yet</Button>}
					next="Contractors see the check of their pours from now on, and are told by mail."
				>
					<PublishWords plan={plan} />
				</Submit>
			</Form>
		</div>
	);
}

/** "Publish: 6 flags to Fennick Forms, answer by Fri 5 Dec 17:00", by the deadline that stands in the field. */
function PublishWords({ plan: { companies } }: { plan: PublishPlan }) {
	const { timeZone } = useSite();
	const now = useNow();
	const typed = new Date(String(useFormContext().watch('answerBy')));
	const said = companies.filter(({ name }) => name !== null).map(({ name, flags }) => `${counted(flags, 'flag')} to ${name}`);
	if (said.length === 0) return 'Publish: no flag to a contractor';
	const deadline = Number.isNaN(typed.getTime()) ? '' : `, answer by ${moment(typed, timeZone, now)}`;
	return `Publish: ${said.join(', ')}${deadline}`;
}
