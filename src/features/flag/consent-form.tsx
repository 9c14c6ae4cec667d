import { z } from 'zod';
import { plainText } from '#shared/base-contract.ts';
import { Choice } from '#src/ui/choice.tsx';
import { LongTextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

const consentForm = z.object({ isGiven: z.enum(['yes', 'no'], 'Choose one.'), reason: plainText(1000) });

interface ConsentFormProps {
	count: number;
	onConsent: (said: { isGiven: boolean; reason: string }) => Promise<unknown>;
}

/** The owner's representative's word on one concession or several. */
export function ConsentForm({ count, onConsent }: ConsentFormProps) {
	return (
		<Form
			schema={consentForm}
			values={{ reason: '' }}
			onSubmit={async ({ isGiven, reason }) => onConsent({ isGiven: isGiven === 'yes', reason })}
		>
			<Choice
				name="isGiven"
				legend={count === 1 ? 'The concession needs your consent' : `${count} concessions need your consent`}
				isRow
				options={[
					{ value: 'yes', label: 'Consent', detail: count === 1 ? 'it stays, within these limits' : 'they stay, within their limits' },
					{ value: 'no', label: 'Do not consent', detail: count === 1 ? 'it is decided anew' : 'they are decided anew' },
				]}
			/>
			<LongTextField name="reason" label="Reason" rows={2} />
			<Submit>Say so</Submit>
		</Form>
	);
}
