import { useMutation, useQueryClient } from '@tanstack/react-query';
import type { ReactNode } from 'react';
import { z } from 'zod';
import { statementText } from '#shared/pour/contract.ts';
import type { HoldPointKind } from '#shared/pour/pour-life.ts';
import { api } from '#src/lib/api.ts';
import { LongTextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

interface WithdrawFormProps {
	siteId: string;
	pourId: string;
	point: HoldPointKind;
	/** What says, or asks, who signs; null in `whyNot` once it is known. */
	proof: ReactNode;
	whyNot: string | null;
	onWithdrawn: () => void;
}

const schema = z.object({ statement: statementText });

/** Takes a release back, by a sealed record of its own. */
export function WithdrawForm({ siteId, pourId, point, proof, whyNot, onWithdrawn }: WithdrawFormProps) {
	const queries = useQueryClient();
	const withdraw = useMutation(api.pour.withdraw.mutationOptions());
	return (
		<Form
			schema={schema}
			values={{ statement: '' }}
			onSubmit={async ({ statement }) => {
				await withdraw.mutateAsync({ siteId, pourId, point, statement });
				await Promise.all([api.pour.key(), api.record.key(), api.site.key()].map((queryKey) => queries.invalidateQueries({ queryKey })));
				onWithdrawn();
			}}
		>
			<LongTextField name="statement" label="Why" hint="It is signed as it stands here." />
			{proof}
			<Submit
				whyNot={whyNot}
				next={
					point === 'before-pour'
						? 'Hold: do not pour goes to all concerned at once. It cannot be taken back.'
						: 'All concerned are told at once. It cannot be taken back.'
				}
			>
				Sign the withdrawal
			</Submit>
		</Form>
	);
}
