import { useMutation, useQueryClient } from '@tanstack/react-query';
import { z } from 'zod';
import { plainText } from '#shared/base-contract.ts';
import type { HoldPointDetail } from '#shared/pour/contract.ts';
import { api } from '#src/lib/api.ts';
import { LongTextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

interface ListFormProps {
	siteId: string;
	pourId: string;
	point: HoldPointDetail;
	onSet: () => void;
}

const question = plainText(200);
const schema = z.object({
	questions: z
		.string()
		.transform((text) => [
			...new Set(
				text
					.split('\n')
					.map((line) => line.trim())
					.filter((line) => line !== ''),
			),
		])
		.refine((lines) => lines.length <= 50, 'At most 50 questions.')
		.refine((lines) => lines.every((line) => question.safeParse(line).success), 'A question has at most 200 characters.'),
});

/** The hold-point list: one question a line. What was answered stays with a question that stays. */
export function ListForm({ siteId, pourId, point, onSet }: ListFormProps) {
	const queries = useQueryClient();
	const set = useMutation(api.pour.setList.mutationOptions());
	return (
		<Form
			schema={schema}
			values={{ questions: point.list.map((one) => one.question).join('\n') }}
			onSubmit={async ({ questions }) => {
				await set.mutateAsync({ siteId, pourId, point: point.kind, questions });
				await queries.invalidateQueries({ queryKey: api.pour.key() });
				onSet();
			}}
		>
			<LongTextField name="questions" label="Questions" hint="One a line: Forms clean and oiled?" rows={8} />
			<Submit next="The contractor answers them all when calling.">Keep the list</Submit>
		</Form>
	);
}
