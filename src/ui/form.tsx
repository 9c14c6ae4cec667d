import { zodResolver } from '@hookform/resolvers/zod';
import { type ReactNode, useId } from 'react';
import { type DefaultValues, type FieldPath, type FieldValues, FormProvider, useForm, useFormState } from 'react-hook-form';
import type { z } from 'zod';
import { refusalOf } from '#src/lib/api-error.ts';
import { Button } from './button.tsx';

interface FormProps<Input extends FieldValues, Output> {
	/** The schema the call sends; read from the contract. */
	schema: z.ZodType<Output, Input>;
	/** What stands in the fields at first. */
	values: DefaultValues<Input>;
	/** Throws what the server refuses: it is shown at its field, or above the button; what was typed stays. */
	onSubmit: (values: Output) => Promise<unknown>;
	/** Which field a refusal belongs to, by its code, where the server does not say: `{ WRONG: 'password' }`. */
	fieldOfCode?: Readonly<Record<string, FieldPath<Input>>>;
	children: ReactNode;
	className?: string;
}

/** A form over one schema: each field shows its own error, a refusal keeps all that was typed. */
export function Form<Input extends FieldValues, Output>({
	schema,
	values,
	onSubmit,
	fieldOfCode = {},
	children,
	className = '',
}: FormProps<Input, Output>) {
	const form = useForm<Input, unknown, Output>({ resolver: zodResolver(schema), defaultValues: values, mode: 'onTouched' });
	const submit = form.handleSubmit(async (parsed) => {
		try {
			await onSubmit(parsed);
		} catch (error) {
			const refusal = refusalOf(error);
			const field = fieldOfCode[refusal.code] ?? (refusal.where as FieldPath<Input> | null);
			const isField = field !== null && form.getFieldState(field) !== undefined && field in flat(form.getValues());
			if (isField) form.setError(field, { type: refusal.code, message: refusal.message }, { shouldFocus: true });
			else form.setError('root.server', { type: refusal.code, message: refusal.message });
		}
	});
	return (
		<FormProvider {...form}>
			<form noValidate onSubmit={submit} className={`flex flex-col gap-4 ${className}`}>
				{children}
			</form>
		</FormProvider>
	);
}

/** Field paths of a form's values: { a: { b: 1 } } has "a" and "a.b". */
function flat(values: FieldValues, prefix = ''): Record<string, true> {
	const paths: Record<string, true> = {};
	for (const [key, value] of Object.entries(values)) {
		paths[prefix + key] = true;
		if (typeof value === 'object' && value !== null && !(value instanceof Date)) Object.assign(paths, flat(value, `${prefix}${key}.`));
	}
	return paths;
}

interface SubmitProps {
	/** The verb, and whom it goes to: "Send to the project engineer". */
	children: ReactNode;
	/** What happens next, below the button. */
	next?: ReactNode;
	/** Other buttons in the same row. */
	beside?: ReactNode;
	whyNot?: string | null;
	/** On a phone fixed to the foot of the screen, within reach of a thumb. */
	isAtFoot?: boolean;
}

/** The bar at a phone's foot: what is beside on the left, the act wide on the right. */
const footClass =
	'max-tablet:fixed max-tablet:inset-x-0 max-tablet:bottom-0 max-tablet:z-10 max-tablet:border-t max-tablet:border-rule max-tablet:bg-sheet max-tablet:px-4 max-tablet:pt-2.5 max-tablet:pb-[max(0.625rem,env(safe-area-inset-bottom))] max-tablet:[&>*]:min-h-13 max-tablet:[&>*]:flex-[2]';

/** The button that sends the form; above it what the server refused, where no field is to blame. */
export function Submit({ children, next, beside, whyNot = null, isAtFoot = false }: SubmitProps) {
	const { isSubmitting, errors } = useFormState();
	const refusalId = useId();
	const refused = errors.root?.server?.message;
	return (
		<div className="flex flex-col gap-3">
			{refused && (
				<p id={refusalId} role="alert" className="m-0 border-l-[7px] border-l-ink pl-3 font-medium">
					{refused}
				</p>
			)}
			<div className={`flex flex-wrap gap-2.5 ${isAtFoot ? footClass : ''}`}>
				<Button
					type="submit"
					weight="act"
					isBusy={isSubmitting}
					whyNot={whyNot}
					aria-describedby={refused ? refusalId : undefined}
					className={isAtFoot ? 'max-tablet:order-2 max-tablet:flex-[3]' : ''}
				>
					{children}
				</Button>
				{beside}
			</div>
			{next && <p className="m-0 text-second">{next}</p>}
		</div>
	);
}
