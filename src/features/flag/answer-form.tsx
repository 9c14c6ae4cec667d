import { useFormContext } from 'react-hook-form';
import { z } from 'zod';
import type { FlagAnswer } from '#shared/flag/flag-schema.ts';
import { Choice } from '#src/ui/choice.tsx';
import { LongTextField, SelectField, TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

/** What is typed, and the contract's answer made of it. The hour of a day's end is the device's. */
const answerForm = z
	.object({
		kind: z.enum(['put-right', 'concession', 'contest'], 'Choose one of the three.'),
		means: z.enum(['rework', 'repair']),
		how: z.string().trim().max(1000),
		by: z.string(),
		why: z.string().trim().max(1000),
		ownSurveyId: z.string(),
	})
	.transform(({ kind, means, how, by, why, ownSurveyId }, context): FlagAnswer => {
		const missing = (path: string, message: string): void => {
			context.addIssue({ code: 'custom', path: [path], message });
		};
		if (kind === 'put-right') {
			if (how === '') missing('how', 'Say how: re-plumb, grind, re-drill.');
			if (!/^\d{4}-\d\d-\d\d$/.test(by)) missing('by', 'Say by which day.');
			return { kind, means, how, by: new Date(`${by}T17:00:00`) };
		}
		if (why === '') missing('why', kind === 'concession' ? 'Say why it does no harm.' : 'Say what is wrong with the measurement.');
		return kind === 'concession' ? { kind, why } : { kind, why, ownSurveyId: ownSurveyId === '' ? null : ownSurveyId };
	});

interface AnswerFormProps {
	/** The answer there is already: it can be changed until it is decided. */
	answer: FlagAnswer | null;
	/** How many flags it answers. */
	count: number;
	/** Whom it goes to: "Ida Roen". */
	decider: string;
	onAnswer: (answer: FlagAnswer) => Promise<unknown>;
	/** Surveys of points that the company has brought. */
	ownSurveys?: readonly { surveyId: string; number: number; name: string }[];
	/** Where own points are brought, beside a contest. */
	ownPoints?: React.ReactNode;
	/** On a phone the bar is at the foot of the screen; not within a dialog. */
	isAtFoot?: boolean;
	beside?: React.ReactNode;
}

/** The contractor's three answers; what each asks for opens below it. */
export function AnswerForm({ answer, count, decider, onAnswer, ownSurveys = [], ownPoints, isAtFoot = false, beside }: AnswerFormProps) {
	const values = {
		...(answer !== null && { kind: answer.kind }),
		means: answer?.kind === 'put-right' ? answer.means : ('rework' as const),
		how: answer?.kind === 'put-right' ? answer.how : '',
		by: answer?.kind === 'put-right' ? answer.by.toISOString().slice(0, 10) : '',
		why: answer !== null && answer.kind !== 'put-right' ? answer.why : '',
		ownSurveyId: (answer?.kind === 'contest' ? answer.ownSurveyId : null) ?? '',
	};
	return (
		<Form schema={answerForm} values={values} onSubmit={onAnswer}>
			<Choice
				name="kind"
				legend={count === 1 ? 'Your answer' : `Your answer to ${count} flags`}
				options={[
					{ value: 'put-right', label: 'We put it right', detail: 're-plumb, grind, re-drill …' },
					{ value: 'concession', label: 'We ask to leave it', detail: 'why it does no harm' },
					{ value: 'contest', label: 'We contest the measurement', detail: 'own points may be added' },
				]}
			/>
			<AnswerFields ownSurveys={ownSurveys} ownPoints={ownPoints} />
			<Submit next={`Goes to ${decider}; it can be changed until ${decider} decides.`} beside={beside} isAtFoot={isAtFoot}>
				{answer === null ? 'Send answer' : 'Change answer'}
			</Submit>
		</Form>
	);
}

function AnswerFields({ ownSurveys, ownPoints }: Required<Pick<AnswerFormProps, 'ownSurveys'>> & Pick<AnswerFormProps, 'ownPoints'>) {
	const kind: unknown = useFormContext().watch('kind');
	if (kind === 'put-right')
		return (
			<>
				<Choice
					name="means"
					legend="By"
					isRow
					options={[
						{ value: 'rework', label: 'Rework', detail: 'as drawn afterwards' },
						{ value: 'repair', label: 'Repair', detail: 'usable, not as drawn' },
					]}
				/>
				<LongTextField name="how" label="How" rows={2} />
				<TextField name="by" label="By which day" type="date" />
			</>
		);
	if (kind === 'concession') return <LongTextField name="why" label="Why it does no harm" />;
	if (kind === 'contest')
		return (
			<>
				<LongTextField name="why" label="What speaks against the measurement" />
				{ownSurveys.length > 0 && (
					<SelectField
						name="ownSurveyId"
						label="Survey of your own"
						hint="Fitted and checked like any other; shown beside, never in its place."
						options={[
							{ value: '', label: 'None' },
							...ownSurveys.map(({ surveyId, number, name }) => ({ value: surveyId, label: `Survey ${number}, ${name}` })),
						]}
					/>
				)}
				{ownPoints}
			</>
		);
	return null;
}
