import { type ReactNode, useId } from 'react';
import { get, useController, useFormContext } from 'react-hook-form';

interface ChoiceOption<Value extends string> {
	value: Value;
	label: ReactNode;
	/** A second line. */
	detail?: ReactNode;
	/** Why it cannot be chosen now; it stays and says so. */
	whyNot?: string;
}

interface ChoiceGroupProps<Value extends string> {
	legend: ReactNode;
	options: readonly ChoiceOption<Value>[];
	value: Value | null;
	onChange: (value: Value) => void;
	error?: string | undefined;
	hint?: ReactNode;
	/** Side by side where there is room. */
	isRow?: boolean;
}

/** One of a few, each a sheet wide enough for a glove. */
export function ChoiceGroup<Value extends string>({
	legend,
	options,
	value,
	onChange,
	error,
	hint,
	isRow = false,
}: ChoiceGroupProps<Value>) {
	const name = useId();
	const errorId = `${name}-error`;
	return (
		<fieldset className="m-0 border-0 p-0" aria-describedby={error ? errorId : undefined}>
			<legend className="mb-1 p-0 font-medium">{legend}</legend>
			{hint && <p className="m-0 mb-2 text-small text-second">{hint}</p>}
			<div className={isRow ? 'grid gap-2.5 tablet:grid-cols-2' : 'flex flex-col gap-2.5'}>
				{options.map((option) => (
					<label
						key={option.value}
						className={`sheet flex min-h-14 items-center gap-3.5 px-3.5 py-2 has-checked:border-ink has-checked:shadow-[inset_0_0_0_2px_var(--color-ink)] has-focus-visible:outline-3 has-focus-visible:outline-offset-2 has-focus-visible:outline-ink ${option.whyNot ? 'cursor-not-allowed text-second' : 'cursor-pointer hover:border-ink'}`}
					>
						<input
							type="radio"
							name={name}
							value={option.value}
							checked={option.value === value}
							aria-disabled={option.whyNot ? true : undefined}
							onChange={() => !option.whyNot && onChange(option.value)}
							className="grid size-6 shrink-0 appearance-none place-items-center rounded-full border-[2.5px] border-ink bg-sheet outline-none before:size-3 before:scale-0 before:rounded-full before:bg-ink checked:before:scale-100"
						/>
						<span className="min-w-0">
							<span className="block font-strong">{option.label}</span>
							{(option.whyNot ?? option.detail) && <span className="block text-second">{option.whyNot ?? option.detail}</span>}
						</span>
					</label>
				))}
			</div>
			{error && (
				<p id={errorId} role="alert" className="m-0 mt-1 text-small font-medium">
					{error}
				</p>
			)}
		</fieldset>
	);
}

interface ChoiceProps<Value extends string> extends Omit<ChoiceGroupProps<Value>, 'value' | 'onChange' | 'error'> {
	/** Its path in the form's values. */
	name: string;
}

/** The same as a field of a Form. */
export function Choice<Value extends string>({ name, ...rest }: ChoiceProps<Value>) {
	const { control, formState } = useFormContext();
	const { field } = useController({ name, control });
	const error: unknown = get(formState.errors, name);
	const message =
		typeof error === 'object' && error !== null && 'message' in error && typeof error.message === 'string' ? error.message : undefined;
	return <ChoiceGroup {...rest} value={(field.value as Value | null | undefined) ?? null} onChange={field.onChange} error={message} />;
}
