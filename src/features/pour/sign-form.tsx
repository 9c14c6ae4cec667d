import { useMutation, useQueryClient } from '@tanstack/react-query';
import { type ReactNode, useState } from 'react';
import { z } from 'zod';
import { conditionForm, statementText } from '#shared/pour/contract.ts';
import type { HoldPointKind } from '#shared/pour/pour-life.ts';
import { api } from '#src/lib/api.ts';
import { fieldMoment, siteMoment } from '#src/lib/site-moment.ts';
import { Button } from '#src/ui/button.tsx';
import { ChoiceGroup } from '#src/ui/choice.tsx';
import { LongTextField, TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

interface SignFormProps {
	siteId: string;
	pourId: string;
	point: HoldPointKind;
	shownSha256: string;
	isReady: boolean;
	statement: string;
	timeZone: string;
	/** What says, or asks, who signs; a text in `whyNotSign` until it is known. */
	proof: ReactNode;
	whyNotSign: string | null;
	/** With the number of the record; null where nothing was signed. */
	onSigned: (sequence: number | null) => void;
}

type Act = 'release' | 'ask-more' | 'refuse';
const words: Record<Act, string> = { release: 'Sign the release', 'ask-more': 'Ask for more', refuse: 'Sign the refusal' };

const schema = z.object({
	statement: statementText,
	conditions: z.array(conditionForm.omit({ dueAt: true }).extend({ due: z.union([z.literal(''), fieldMoment]) })).max(50),
});

/**
 * What the owner's representative says to a hold point. Signing asks who one is; it holds for ten minutes, so that several pours are signed
 * one after the other, each shown whole.
 */
export function SignForm({ siteId, pourId, point, shownSha256, isReady, statement, timeZone, proof, whyNotSign, onSigned }: SignFormProps) {
	const [act, setAct] = useState<Act>('release');
	const [conditionCount, setConditionCount] = useState(0);
	const queries = useQueryClient();
	const release = useMutation(api.pour.release.mutationOptions());
	const refuse = useMutation(api.pour.refuse.mutationOptions());
	const askMore = useMutation(api.pour.askMore.mutationOptions());
	const rows = Array.from({ length: conditionCount }, (_, index) => index);
	return (
		<Form
			schema={schema}
			values={{ statement, conditions: [] }}
			onSubmit={async (said) => {
				const about = { siteId, pourId, point, statement: said.statement };
				const conditions = said.conditions
					.slice(0, conditionCount)
					.map(({ due, ...condition }) => ({ ...condition, dueAt: due === '' ? null : siteMoment(due, timeZone) }));
				let sequence: number | null = null;
				if (act === 'release') ({ sequence } = await release.mutateAsync({ ...about, shownSha256, conditions }));
				else if (act === 'refuse') ({ sequence } = await refuse.mutateAsync({ ...about, shownSha256 }));
				else await askMore.mutateAsync(about);
				await Promise.all([api.pour.key(), api.record.key(), api.site.key()].map((queryKey) => queries.invalidateQueries({ queryKey })));
				onSigned(sequence);
			}}
		>
			<ChoiceGroup<Act>
				legend="What you say to it"
				value={act}
				onChange={setAct}
				options={[
					{ value: 'release', label: 'Release', ...(isReady ? {} : { whyNot: 'It is not ready.' }) },
					{ value: 'ask-more', label: 'Ask for more' },
					{ value: 'refuse', label: 'Refuse' },
				]}
				isRow
			/>
			<LongTextField name="statement" label="Your statement" hint="It is signed as it stands here." />
			{act === 'release' &&
				rows.map((index) => (
					<fieldset key={index} className="m-0 grid gap-3 border-0 border-l-[3px] border-l-rule p-0 pl-3 tablet:grid-cols-2">
						<TextField name={`conditions.${index}.text`} label={`Condition ${index + 1}`} />
						<TextField name={`conditions.${index}.owner`} label="Who sees to it" />
						<TextField name={`conditions.${index}.due`} type="datetime-local" label="By when" hint="May stay empty" isMono />
						<TextField name={`conditions.${index}.proof`} label="What shows it" hint="a photo, a survey …" />
					</fieldset>
				))}
			{act === 'release' && (
				<div>
					<Button onClick={() => setConditionCount((count) => count + 1)}>Add a condition</Button>{' '}
					{conditionCount > 0 && (
						<Button weight="plain" onClick={() => setConditionCount((count) => count - 1)}>
							Without the last one
						</Button>
					)}
				</div>
			)}
			{act !== 'ask-more' && proof}
			<Submit
				whyNot={act === 'ask-more' ? null : whyNotSign}
				next={
					act === 'ask-more' ? 'Nothing is signed.' : 'It becomes a sealed record and is never edited; it can only be withdrawn by another.'
				}
			>
				{words[act]}
			</Submit>
		</Form>
	);
}
