import type { ReactNode } from 'react';

const form =
	'inline-flex min-h-10 items-center gap-2 rounded-round border border-rule bg-sheet px-3.5 text-left leading-tight pointer-coarse:min-h-12';

interface ChipProps {
	children: ReactNode;
	isOn: boolean;
	onChange: (isOn: boolean) => void;
	/** Drawn before the word. */
	glyph?: ReactNode;
	title?: string;
}

/** A filter that is on or off. On: an ink edge; off: it recedes. */
export function Chip({ children, isOn, onChange, glyph, title }: ChipProps) {
	return (
		<button
			type="button"
			aria-pressed={isOn}
			title={title}
			onClick={() => onChange(!isOn)}
			className={`${form} aria-pressed:border-ink aria-pressed:shadow-[inset_0_0_0_1px_var(--color-ink)] not-aria-pressed:text-second hover:border-ink`}
		>
			{glyph}
			<span>{children}</span>
		</button>
	);
}

interface PressChipProps {
	children: ReactNode;
	onPress: () => void;
	title?: string;
}

/** A chip that does something at once and stays as it is: "frame", "whole". */
export function PressChip({ children, onPress, title }: PressChipProps) {
	return (
		<button type="button" title={title} onClick={onPress} className={`${form} hover:border-ink`}>
			{children}
		</button>
	);
}

interface SegmentedProps<Value extends string> {
	/** What is chosen, for a screen reader: "View". */
	legend: string;
	options: readonly { value: Value; label: ReactNode; title?: string }[];
	value: Value;
	onChange: (value: Value) => void;
}

/** One of a few, side by side: "Model", "Plan". A group of radio buttons to the keyboard. */
export function Segmented<Value extends string>({ legend, options, value, onChange }: SegmentedProps<Value>) {
	return (
		<fieldset className="m-0 flex flex-wrap gap-2 border-0 p-0">
			<legend className="sr-only">{legend}</legend>
			{options.map((option) => (
				<label
					key={option.value}
					title={option.title}
					className={`${form} cursor-pointer hover:border-ink has-checked:border-ink has-checked:shadow-[inset_0_0_0_1px_var(--color-ink)] has-focus-visible:outline-3 has-focus-visible:outline-offset-2 has-focus-visible:outline-ink`}
				>
					<input type="radio" name={legend} className="sr-only" checked={option.value === value} onChange={() => onChange(option.value)} />
					{option.label}
				</label>
			))}
		</fieldset>
	);
}
