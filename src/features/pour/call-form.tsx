import { useMutation, useQueryClient } from '@tanstack/react-query';
import { z } from 'zod';
import type { HoldPointDetail } from '#shared/pour/contract.ts';
import { api } from '#src/lib/api.ts';
import { fieldMoment, fieldTextOf, siteMoment } from '#src/lib/site-moment.ts';
import { TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

interface CallFormProps {
	siteId: string;
	pourId: string;
	point: HoldPointDetail;
	timeZone: string;
	now: Date;
	onCalled: () => void;
}

const schema = z.object({
	readyFrom: fieldMoment,
	answers: z.array(z.object({ answer: z.string().trim().min(1, 'Answer this too.').max(300) })),
});

/** The contractor calls a hold point: ready from when, and the list answered. One question below the other, for a phone. */
export function CallForm({ siteId, pourId, point, timeZone, now, onCalled }: CallFormProps) {
	const queries = useQueryClient();
	const call = useMutation(api.pour.call.mutationOptions());
	return (
		<Form
			schema={schema}
			values={{
				readyFrom: fieldTextOf(point.readyFrom ?? now, timeZone),
				answers: point.list.map(({ answer }) => ({ answer: answer ?? '' })),
			}}
			onSubmit={async ({ readyFrom, answers }) => {
				await call.mutateAsync({
					siteId,
					pourId,
					point: point.kind,
					readyFrom: siteMoment(readyFrom, timeZone),
					answers: answers.map(({ answer }) => answer),
				});
				await queries.invalidateQueries({ queryKey: api.pour.key() });
				onCalled();
			}}
		>
			<TextField name="readyFrom" type="datetime-local" label="Ready as of" hint="By the site’s clock" isMono />
			{point.list.length === 0 && <p className="m-0 text-second">The hold-point list has no questions.</p>}
			{point.list.map(({ question }, index) => (
				<TextField key={question} name={`answers.${index}.answer`} label={question} />
			))}
			<Submit next="The project engineer looks at it and submits it.">Call the hold point</Submit>
		</Form>
	);
}
