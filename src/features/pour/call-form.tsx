import { useMutation, useQueryClient } from '@tanstack/react-query';
import { z } from 'zod';
import type { HoldPointDetail } from '#shared/pour/contract.ts';
import { api } from '#src/lib/api.ts';
import { TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

interface CallFormProps {
	siteId: string;
	pourId: string;
	point: HoldPointDetail;
	onCalled: () => void;
}

const schema = z.object({
	readyFrom: z.string().regex(/^\d{4}-\d\d-\d\dT\d\d:\d\d$/, 'Write date and hour, as 2026-12-04T06:30.'),
	answers: z.array(z.object({ answer: z.string().trim().min(1, 'Answer this too.').max(300) })),
});

/** The contractor calls a hold point: ready from when, and the list answered. */
export function CallForm({ siteId, pourId, point, onCalled }: CallFormProps) {
	const queries = useQueryClient();
	const call = useMutation(api.pour.call.mutationOptions());
	return (
		<Form
			schema={schema}
			values={{ readyFrom: '', answers: point.list.map(({ answer }) => ({ answer: answer ?? '' })) }}
			onSubmit={async ({ readyFrom, answers }) => {
				await call.mutateAsync({
					siteId,
					pourId,
					point: point.kind,
					readyFrom: new Date(readyFrom),
					answers: answers.map(({ answer }) => answer),
				});
				await queries.invalidateQueries({ queryKey: api.pour.key() });
				onCalled();
			}}
		>
			<TextField name="readyFrom" label="Ready from then on" hint="As 2026-12-04T06:30" isMono />
			{point.list.map(({ question }, index) => (
				<TextField key={question} name={`answers.${index}.answer`} label={question} />
			))}
			<Submit next="The project engineer looks at it and submits it.">Call the hold point</Submit>
		</Form>
	);
}
