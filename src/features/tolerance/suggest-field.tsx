import { useId } from 'react';
import { get, useFormContext } from 'react-hook-form';
import { describedBy, FieldFrame, inputClass } from '#src/ui/field.tsx';

interface SuggestFieldProps {
	/** Its path in the form's values. */
	name: string;
	label: string;
	hint?: string;
	/** What is known of the site; anything else may be written. */
	known: readonly string[];
}

/** A word to write, with those that the site's models have to take from. */
export function SuggestField({ name, label, hint, known }: SuggestFieldProps) {
	const id = useId();
	const { register, formState } = useFormContext();
	const error: unknown = get(formState.errors, `${name}.message`);
	const message = typeof error === 'string' ? error : undefined;
	return (
		<FieldFrame id={id} label={label} hint={hint} error={message}>
			<input
				id={id}
				type="text"
				list={`${id}-known`}
				autoComplete="off"
				spellCheck={false}
				aria-invalid={message ? true : undefined}
				aria-describedby={describedBy(id, hint, message)}
				className={inputClass}
				{...register(name)}
			/>
			<datalist id={`${id}-known`}>
				{known.map((word) => (
					<option key={word} value={word} />
				))}
			</datalist>
		</FieldFrame>
	);
}
