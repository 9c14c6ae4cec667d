import { useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import type { FlagSummary } from '#shared/flag/contract.ts';
import { AnswerForm } from '#src/features/flag/answer-form.tsx';
import { DecideForm } from '#src/features/flag/decide-form.tsx';
import { api, client } from '#src/lib/api.ts';
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
	const [asked, ask] = useState<'answer' | 'decide' | null>(null);
	if (flags.length === 0 || (!mayAnswer && !mayDecide)) return null;
	const targets = flags.map(({ flagId, version }) => ({ flagId, version }));
	const done = async (): Promise<void> => {
		await Promise.all([queries.invalidateQueries({ queryKey: api.flag.key() }), queries.invalidateQueries({ queryKey: api.site.key() })]);
		ask(null);
		onDone();
	};
	const isTooClose = flags.every(({ verdict }) => verdict !== 'outside');
	const isMixed = !isTooClose && flags.some(({ verdict }) => verdict !== 'outside');
	return (
		<div className="sheet mb-2 flex flex-wrap items-center gap-3 px-4 py-2 max-tablet:fixed max-tablet:inset-x-2 max-tablet:bottom-[5.25rem] max-tablet:z-10 max-tablet:shadow-lift">
			<b className="flex-1">{counted(flags.length, 'flag')} chosen</b>
			{mayAnswer && (
				<Button weight="act" onClick={() => ask('answer')}>
					Answer
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
			{asked === 'decide' && (
				<Dialog isOpen onClose={() => ask(null)} title={`Decide on ${counted(flags.length, 'flag')}`}>
					<DecideForm
						count={flags.length}
						isTooClose={isTooClose}
						maySurveyOnly={!isProjectEngineer}
						worstMm={Math.max(...flags.map(({ worstMm }) => worstMm))}
						needsOwnersConsent={false}
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
