import { useFormContext } from 'react-hook-form';
import { z } from 'zod';
import type { FlagDecision } from '#shared/flag/flag-schema.ts';
import { plainMm } from '#src/lib/format.ts';
import { Choice } from '#src/ui/choice.tsx';
import { LongTextField, NumberField, TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

const optionalDay = z.string().regex(/^(\d{4}-\d\d-\d\d)?$/, 'Write a day, or nothing.');
const dayEnd = (day: string): Date | null => (day === '' ? null : new Date(`${day}T17:00:00`));

const decideForm = z
	.object({
		kind: z.enum(
			['rework', 'repair', 'concession', 'reject-and-replace', 'survey-again', 'taken-as-measured'],
			'Choose what becomes of it.',
		),
		reason: z.string().trim().min(1, 'Say why: it is read later by who was not there.').max(1000),
		by: optionalDay,
		conditions: z.string().trim().max(1000),
		upToMm: z.number().positive('Say up to how many millimetres.').nullable(),
		extent: z.string().trim().max(300),
		number: z.number().int().positive().nullable(),
		until: optionalDay,
		use: z.string().trim().max(300),
		sigmaMm: z.number().positive().nullable(),
	})
	.transform((typed, context): FlagDecision => {
		const { kind, reason } = typed;
		if (kind === 'survey-again') return { kind, reason, sigmaMm: typed.sigmaMm };
		if (kind === 'taken-as-measured') return { kind, reason };
		if (kind !== 'concession') return { kind, reason, by: dayEnd(typed.by) };
		if (typed.upToMm === null) context.addIssue({ code: 'custom', path: ['upToMm'], message: 'Say up to how many millimetres.' });
		if (typed.extent === '')
			context.addIssue({ code: 'custom', path: ['extent'], message: 'Say where it holds: this face, these columns.' });
		return {
			kind,
			reason,
			conditions: typed.conditions === '' ? null : typed.conditions,
			limits: {
				upToMm: typed.upToMm ?? 0,
				extent: typed.extent,
				number: typed.number,
				until: dayEnd(typed.until),
				use: typed.use === '' ? null : typed.use,
			},
		};
	});

interface DecideFormProps {
	count: number;
	/** Too close to call or undecided: surveyed again, or taken as measured. */
	isTooClose: boolean;
	/** A site engineer says only that it is to be surveyed again. */
	maySurveyOnly: boolean;
	/** The farthest of the flags from its place, mm: a concession must reach it. */
	worstMm: number;
	needsOwnersConsent: boolean;
	onDecide: (decision: FlagDecision) => Promise<unknown>;
	beside?: React.ReactNode;
}

const work = [
	{ value: 'rework', label: 'Rework', detail: 'as drawn afterwards' },
	{ value: 'repair', label: 'Repair', detail: 'usable, not as drawn' },
	{ value: 'concession', label: 'Concession', detail: 'it stays, within limits you state' },
	{ value: 'reject-and-replace', label: 'Reject and replace', detail: 'it goes' },
] as const;
const surveyAgain = { value: 'survey-again', label: 'Survey again', detail: 'with the σ that is needed to tell' } as const;
const asMeasured = { value: 'taken-as-measured', label: 'Take it as measured', detail: 'the deviation counts without its U' } as const;

/** The project engineer's decision, over one flag or several. */
export function DecideForm(props: DecideFormProps) {
	const { count, isTooClose, maySurveyOnly, worstMm, needsOwnersConsent, onDecide, beside } = props;
	const options = maySurveyOnly ? [surveyAgain] : isTooClose ? [surveyAgain, asMeasured] : [...work, surveyAgain];
	return (
		<Form
			schema={decideForm}
			values={{
				...(maySurveyOnly && { kind: 'survey-again' as const }),
				reason: '',
				by: '',
				conditions: '',
				upToMm: null,
				extent: '',
				number: null,
				until: '',
				use: '',
				sigmaMm: null,
			}}
			onSubmit={onDecide}
		>
			<Choice name="kind" legend={count === 1 ? 'Your decision' : `Your decision on ${count} flags`} options={options} isRow />
			<DecideFields worstMm={worstMm} />
			<LongTextField name="reason" label="Reason" hint="Stands on the flag and on every record that rests on it." />
			<Submit
				next={
					needsOwnersConsent && !isTooClose ? 'On this site a concession holds only with the owner’s representative’s consent.' : undefined
				}
				beside={beside}
			>
				{maySurveyOnly ? 'Have it surveyed again' : 'Decide'}
			</Submit>
		</Form>
	);
}

function DecideFields({ worstMm }: { worstMm: number }) {
	const kind: unknown = useFormContext().watch('kind');
	if (kind === 'concession')
		return (
			<div className="grid gap-4 tablet:grid-cols-2">
				<NumberField name="upToMm" label="Up to" unit="mm" hint={`Either way. Measured: ${plainMm(worstMm)} mm.`} />
				<TextField name="extent" label="Where it holds" hint="This face; columns of axis C." />
				<NumberField name="number" label="How many" unit="" isOptional hint="Left empty: not limited." />
				<TextField name="until" label="Until" type="date" hint="Left empty: for good." />
				<TextField name="use" label="For which use" hint="Left empty: any." />
				<TextField name="conditions" label="Conditions" hint="Left empty: none." />
			</div>
		);
	if (kind === 'survey-again')
		return <NumberField name="sigmaMm" label="σ that is needed" unit="mm" isOptional hint="Left empty: not said." />;
	if (kind === 'rework' || kind === 'repair' || kind === 'reject-and-replace')
		return <TextField name="by" label="By which day" type="date" hint="Left empty: not said." />;
	return null;
}
