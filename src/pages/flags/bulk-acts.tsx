import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import type { FlagSummary } from '#shared/flag/contract.ts';
import { flagTitle } from '#shared/flag/flag-name.ts';
import { decisionWords } from '#shared/flag/said-words.ts';
import { AnswerForm } from '#src/features/flag/answer-form.tsx';
import { ConsentForm } from '#src/features/flag/consent-form.tsx';
import { DecideForm } from '#src/features/flag/decide-form.tsx';
import { api, client } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { counted } from '#src/lib/format.ts';
import { useMay, useSite } from '#src/lib/session.ts';
import { Button } from '#src/ui/button.tsx';
import { Dialog } from '#src/ui/dialog.tsx';

/** What can be done with the flags that are chosen, all or none. */
export function BulkActs({ siteId, flags, onDone }: { siteId: string; flags: readonly FlagSummary[]; onDone: () => void }) {
	const queries = useQueryClient();
	const { roles } = useSite();
	const mayAnswer = useMay('flag.answer');
	const mayDecide = useMay('flag.decide');
	const isProjectEngineer = roles.includes('project-engineer');
	const mayGrant = useMay('flag.grant');
	const mayConsent = useMay('flag.consent');
	const [asked, ask] = useState<'answer' | 'decide' | 'consent' | null>(null);
	const [busy, setBusy] = useState(false);
	const [fault, setFault] = useState<string | null>(null);
	const settings = useQuery({ ...api.site.settings.queryOptions({ input: { siteId } }), enabled: mayDecide });
	if (flags.length === 0 || (!mayAnswer && !mayDecide && !mayConsent)) return null;
	const targets = flags.map(({ flagId, version }) => ({ flagId, version }));
	const done = async (): Promise<void> => {
		await Promise.all([queries.invalidateQueries({ queryKey: api.flag.key() }), queries.invalidateQueries({ queryKey: api.site.key() })]);
		ask(null);
		onDone();
	};
	const now = async (call: () => Promise<unknown>): Promise<void> => {
		setBusy(true);
		setFault(null);
		try {
			await call();
			await done();
		} catch (error) {
			setFault(refusalOf(error).message);
		} finally {
			setBusy(false);
		}
	};
	const isWork = flags.every(
		({ state, decision }) => state === 'decided' && ['rework', 'repair', 'reject-and-replace'].includes(decision?.kind ?? ''),
	);
	const isTimeAsked = flags.every(({ timeAsked }) => timeAsked !== null);
	const isConsentAwaited = flags.every((flag) => flag.isConsentAwaited);
	const isTooClose = flags.every(({ verdict }) => verdict !== 'outside');
	const isMixed = !isTooClose && flags.some(({ verdict }) => verdict !== 'outside');
	return (
		<div className="sheet mb-2 flex flex-wrap items-center gap-3 px-4 py-2 max-tablet:fixed max-tablet:inset-x-2 max-tablet:bottom-[5.25rem] max-tablet:z-10 max-tablet:shadow-lift">
			<b className="flex-1">{counted(flags.length, 'flag')} chosen</b>
			{mayAnswer && (
				<Button weight="act" whyNot={isWork ? 'These are decided already.' : null} onClick={() => ask('answer')}>
					Answer
				</Button>
			)}
			{mayAnswer && (
				<Button
					isBusy={busy}
					whyNot={isWork ? null : 'Choose only flags that were decided: rework, repair or replace.'}
					onClick={() => void now(() => client.flag.putRight({ siteId, flags: targets }))}
				>
					Put right, ready to measure
				</Button>
			)}
			{mayGrant && (
				<Button
					isBusy={busy}
					whyNot={isTimeAsked ? null : 'Choose only flags on which more time is asked for.'}
					onClick={() => void now(() => client.flag.grantTime({ siteId, flags: targets }))}
				>
					Grant the time
				</Button>
			)}
			{mayConsent && (
				<Button
					weight="act"
					whyNot={isConsentAwaited ? null : 'Choose only concessions that wait for your consent.'}
					onClick={() => ask('consent')}
				>
					Consent or not
				</Button>
			)}
			{mayDecide && (
				<Button
					weight="act"
					whyNot={isMixed && isProjectEngineer ? 'Some are outside and some too close to call: those are decided apart.' : null}
					onClick={() => ask('decide')}
				>
					{isProjectEngineer ? 'Decide' : 'Survey again'}
				</Button>
			)}
			<Button onClick={onDone}>Choose none</Button>
			{asked === 'answer' && (
				<Dialog isOpen onClose={() => ask(null)} title={`Answer ${counted(flags.length, 'flag')}`}>
					<AnswerForm
						answer={null}
						count={flags.length}
						decider="the project engineer"
						onAnswer={async (answer) => {
							await client.flag.answer({ siteId, flags: targets, answer });
							await done();
						}}
					/>
				</Dialog>
			)}
			{fault && (
				<p role="alert" className="m-0 basis-full font-medium">
					{fault}
				</p>
			)}
			{asked === 'consent' && (
				<Dialog isOpen onClose={() => ask(null)} title={`Consent to ${counted(flags.length, 'concession')}`}>
					<ul className="m-0 mb-3 max-h-60 list-none overflow-auto p-0">
						{flags.map((flag) => (
							<li key={flag.flagId} className="border-b border-b-hair py-1.5">
								<b>{flagTitle(flag)}</b>
								<span className="block">{flag.decision && decisionWords(flag.decision, flag.isDecidedWithoutAnswer).words}</span>
							</li>
						))}
					</ul>
					<ConsentForm
						count={flags.length}
						onConsent={async (said) => {
							await client.flag.consent({ siteId, flags: targets, ...said });
							await done();
						}}
					/>
				</Dialog>
			)}
			{asked === 'decide' && (
				<Dialog isOpen onClose={() => ask(null)} title={`Decide on ${counted(flags.length, 'flag')}`}>
					<DecideForm
						count={flags.length}
						isTooClose={isTooClose}
						maySurveyOnly={!isProjectEngineer}
						worstMm={Math.max(...flags.map(({ worstMm }) => worstMm))}
						needsOwnersConsent={settings.data?.settings.needsOwnersConsent ?? false}
						onDecide={async (decision) => {
							await client.flag.decide({ siteId, flags: targets, decision });
							await done();
						}}
					/>
				</Dialog>
			)}
		</div>
	);
}
