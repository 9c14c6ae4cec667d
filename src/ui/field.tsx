import { type HTMLInputAutoCompleteAttribute, type ReactNode, useId } from 'react';
import { get, useFormContext } from 'react-hook-form';

/** The look of an input, for one that is none of the fields below. */
export const inputClass =
	'block min-h-11 w-full rounded-corner border-[1.5px] border-field bg-sheet px-3 py-1.5 text-body text-ink placeholder:text-second aria-invalid:border-2 aria-invalid:border-ink pointer-coarse:min-h-12';

interface FieldFrameProps {
	id: string;
	label: ReactNode;
	/** Below the label: what to write, in which unit. */
	hint?: ReactNode;
	error?: string | undefined;
	children: ReactNode;
	className?: string;
}

/** Label, hint, the input, and what is wrong with it: for inputs of a form and for others alike. Give the input `describedBy(id, …)`. */
export function FieldFrame({ id, label, hint, error, children, className = '' }: FieldFrameProps) {
	return (
		<div className={`flex flex-col gap-1 ${className}`}>
			<label htmlFor={id} className="font-medium">
				{label}
			</label>
			{hint && (
				<span id={`${id}-hint`} className="text-small text-second">
					{hint}
				</span>
			)}
			{children}
			{error && (
				<span id={`${id}-error`} role="alert" className="flex gap-2 text-small font-medium">
					<svg width="10" height="18" viewBox="0 0 10 18" aria-hidden="true" className="shrink-0">
						<path d="M0 9L9 4V14Z" className="fill-ink" />
					</svg>
					{error}
				</span>
			)}
		</div>
	);
}

/** The ids that describe an input within a FieldFrame. */
export function describedBy(id: string, hint: unknown, error: unknown): string | undefined {
	return [hint ? `${id}-hint` : '', error ? `${id}-error` : ''].filter(Boolean).join(' ') || undefined;
}

interface FieldProps {
	/** Its path in the form's values. */
	name: string;
	label: ReactNode;
	hint?: ReactNode;
	className?: string;
}

function useField(name: string) {
	const { register, formState } = useFormContext();
	const error: unknown = get(formState.errors, name);
	const message =
		typeof error === 'object' && error !== null && 'message' in error && typeof error.message === 'string' ? error.message : undefined;
	return { register, message };
}

interface TextFieldProps extends FieldProps {
	type?: 'text' | 'email' | 'password' | 'date' | 'datetime-local' | 'search';
	autoComplete?: HTMLInputAutoCompleteAttribute;
	/** Coordinates and codes. */
	isMono?: boolean;
}

/** One line of text, or a date of the calendar ("2026-12-01"). */
export function TextField({ name, label, hint, className, type = 'text', autoComplete = 'off', isMono = false }: TextFieldProps) {
	const id = useId();
	const { register, message } = useField(name);
	return (
		<FieldFrame id={id} label={label} hint={hint} error={message} {...(className && { className })}>
			<input
				id={id}
				type={type}
				autoComplete={autoComplete}
				spellCheck={type === 'text'}
				aria-invalid={message ? true : undefined}
				aria-describedby={describedBy(id, hint, message)}
				className={`${inputClass} ${isMono ? 'font-mono' : ''}`}
				{...register(name)}
			/>
		</FieldFrame>
	);
}

/** Several lines. */
export function LongTextField({ name, label, hint, className, rows = 3 }: FieldProps & { rows?: number }) {
	const id = useId();
	const { register, message } = useField(name);
	return (
		<FieldFrame id={id} label={label} hint={hint} error={message} {...(className && { className })}>
			<textarea
				id={id}
				rows={rows}
				aria-invalid={message ? true : undefined}
				aria-describedby={describedBy(id, hint, message)}
				className={inputClass}
				{...register(name)}
			/>
		</FieldFrame>
	);
}

interface NumberFieldProps extends FieldProps {
	/** Stands in the input's right end: "mm". */
	unit: string;
	/** Empty is null, not a fault. */
	isOptional?: boolean;
}

/** A number with its unit; takes decimal comma and point and the real minus. An empty one is never 0: it is a fault, or null where optional. */
export function NumberField({ name, label, hint, className, unit, isOptional = false }: NumberFieldProps) {
	const id = useId();
	const { register, message } = useField(name);
	const shown = message?.startsWith('Invalid input') ? `Write a number, in ${unit}.` : message;
	return (
		<FieldFrame id={id} label={label} hint={hint} error={shown} {...(className && { className })}>
			<span className="relative block">
				<input
					id={id}
					type="text"
					inputMode="decimal"
					autoComplete="off"
					aria-invalid={shown ? true : undefined}
					aria-describedby={describedBy(id, hint, shown)}
					className={`${inputClass} pr-12 text-right`}
					{...register(name, { setValueAs: (typed: unknown) => numberOf(typed, isOptional) })}
				/>
				<span aria-hidden="true" className="pointer-events-none absolute inset-y-0 right-3 flex items-center text-second">
					{unit}
				</span>
			</span>
		</FieldFrame>
	);
}

/** What was typed as a number; NaN where it is none, so that the schema refuses it. */
export function numberOf(typed: unknown, isOptional: boolean): number | null {
	if (typeof typed === 'number' || typed === null) return typed;
	const text = String(typed ?? '')
		.trim()
		.replace('\u2212', '-')
		.replace(',', '.');
	if (text === '') return isOptional ? null : Number.NaN;
	return Number(text);
}

interface SelectFieldProps extends FieldProps {
	options: readonly { value: string; label: string }[];
}

/** One of many, from a list. For two to five use Choice. */
export function SelectField({ name, label, hint, className, options }: SelectFieldProps) {
	const id = useId();
	const { register, message } = useField(name);
	return (
		<FieldFrame id={id} label={label} hint={hint} error={message} {...(className && { className })}>
			<select
				id={id}
				aria-invalid={message ? true : undefined}
				aria-describedby={describedBy(id, hint, message)}
				className={inputClass}
				{...register(name)}
			>
				{options.map((option) => (
					<option key={option.value} value={option.value}>
						{option.label}
					</option>
				))}
			</select>
		</FieldFrame>
	);
}

/** Yes or no, with its consequence as the label. */
export function TickField({ name, label, hint, className = '' }: FieldProps) {
	const id = useId();
	const { register, message } = useField(name);
	return (
		<div className={`flex flex-col gap-1 ${className}`}>
			<label htmlFor={id} className="flex min-h-11 cursor-pointer items-center gap-3 pointer-coarse:min-h-12">
				<input
					id={id}
					type="checkbox"
					className="size-5 shrink-0 accent-ink"
					aria-describedby={describedBy(id, hint, message)}
					{...register(name)}
				/>
				<span>{label}</span>
			</label>
			{hint && (
				<span id={`${id}-hint`} className="text-small text-second">
					{hint}
				</span>
			)}
			{message && (
				<span id={`${id}-error`} role="alert" className="text-small font-medium">
					{message}
				</span>
			)}
		</div>
	);
}
