import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { z } from 'zod';
import { conditionForm, statementText } from '#shared/pour/contract.ts';
import type { HoldPointKind } from '#shared/pour/pour-life.ts';
import { api } from '#src/lib/api.ts';
import { errorCode, refusalOf } from '#src/lib/api-error.ts';
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
	onSigned: () => void;
}

type Act = 'release' | 'ask-more' | 'refuse';
const words: Record<Act, string> = { release: 'Sign the release', 'ask-more': 'Ask for more', refuse: 'Sign the refusal' };

const schema = z.object({
	statement: statementText,
	password: z.string(),
	conditions: z
		.array(
			conditionForm
				.omit({ dueAt: true })
				.extend({ due: z.union([z.literal(''), z.string().regex(/^\d{4}-\d\d-\d\dT\d\d:\d\d$/, 'As 2026-12-04T12:00.')]) }),
		)
		.max(50),
});

/**
 * What the owner's representative says to a hold point. Signing asks who one is; it holds for ten minutes, so that several pours are signed
 * one after the other, each shown whole.
 */
export function SignForm({ siteId, pourId, point, shownSha256, isReady, statement, onSigned }: SignFormProps) {
	const [act, setAct] = useState<Act>('release');
	const [isPasswordAsked, setIsPasswordAsked] = useState(false);
	const [conditionCount, setConditionCount] = useState(0);
	const queries = useQueryClient();
	const release = useMutation(api.pour.release.mutationOptions());
	const refuse = useMutation(api.pour.refuse.mutationOptions());
	const askMore = useMutation(api.pour.askMore.mutationOptions());
	const again = useMutation(api.account.reauthenticate.mutationOptions());
	const rows = Array.from({ length: conditionCount }, (_, index) => index);
	return (
		<Form
			schema={schema}
			values={{ statement, password: '', conditions: [] }}
			fieldOfCode={{ WRONG: 'password' }}
			onSubmit={async (said) => {
				const about = { siteId, pourId, point, statement: said.statement };
				const conditions = said.conditions
					.slice(0, conditionCount)
					.map(({ due, ...condition }) => ({ ...condition, dueAt: due === '' ? null : new Date(due) }));
				if (isPasswordAsked) await again.mutateAsync({ proof: { way: 'password', password: said.password } });
				try {
					if (act === 'release') await release.mutateAsync({ ...about, shownSha256, conditions });
					else if (act === 'refuse') await refuse.mutateAsync({ ...about, shownSha256 });
					else await askMore.mutateAsync(about);
				} catch (error) {
					// Not said lately who one is: the field comes, what was typed stays.
					if (errorCode(error) === 'REFUSED' && refusalOf(error).message.startsWith('Say again who you are')) setIsPasswordAsked(true);
					throw error;
				}
				await Promise.all([api.pour.key(), api.record.key(), api.site.key()].map((queryKey) => queries.invalidateQueries({ queryKey })));
				onSigned();
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
						<TextField name={`conditions.${index}.due`} label="By when" hint="As 2026-12-04T12:00, or empty" isMono />
						<TextField name={`conditions.${index}.proof`} label="What shows it" hint="a photo, a survey …" />
					</fieldset>
				))}
			{act === 'release' && (
				<div>
					<Button onClick={() => setConditionCount((count) => count + 1)}>Add a condition</Button>
				</div>
			)}
			{isPasswordAsked && (
				<TextField
					name="password"
					type="password"
					autoComplete="current-password"
					label="Your password, again"
					hint="It holds for ten minutes."
				/>
			)}
			<Submit
				next={
					act === 'ask-more' ? 'Nothing is signed.' : 'It becomes a sealed record and is never edited; it can only be withdrawn by another.'
				}
			>
				{words[act]}
			</Submit>
		</Form>
	);
}
