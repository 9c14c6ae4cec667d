import { useId } from 'react';
import { FieldFrame } from '#src/ui/field.tsx';

const inputClass =
	'block min-h-11 w-full rounded-corner border-[1.5px] border-field bg-sheet px-3 py-1.5 text-body text-ink pointer-coarse:min-h-12';

interface SearchProps {
	label: string;
	value: string;
	onChange: (value: string) => void;
}

/** Narrows rows by what is written. */
export function Search({ label, value, onChange }: SearchProps) {
	const id = useId();
	return (
		<FieldFrame id={id} label={label}>
			<input id={id} type="search" value={value} onChange={(event) => onChange(event.target.value)} className={inputClass} />
		</FieldFrame>
	);
}

interface ChooseProps extends SearchProps {
	options: readonly { value: string; label: string }[];
	/** What stands for none of them. */
	all: string;
}

/** Narrows rows to one kind, or to none. */
export function Choose({ label, value, onChange, options, all }: ChooseProps) {
	const id = useId();
	return (
		<FieldFrame id={id} label={label}>
			<select id={id} value={value} onChange={(event) => onChange(event.target.value)} className={inputClass}>
				<option value="">{all}</option>
				{options.map((option) => (
					<option key={option.value} value={option.value}>
						{option.label}
					</option>
				))}
			</select>
		</FieldFrame>
	);
}
