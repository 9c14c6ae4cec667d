import { useFieldArray, useFormContext, useWatch } from 'react-hook-form';
import { Button } from '#src/ui/button.tsx';
import { NumberField, SelectField, TickField } from '#src/ui/field.tsx';
import type { TypedLimit } from './typed-limit.ts';
import type { TypedSheet } from './typed-sheet.ts';

type SideName = `rules.${number}.lower` | `rules.${number}.upper`;

const kinds: readonly { value: TypedLimit['kind']; label: string }[] = [
	{ value: 'none', label: 'No limit on this side' },
	{ value: 'term', label: 'A number, or a size over n' },
	{ value: 'greater', label: 'The greater of two' },
	{ value: 'lesser', label: 'The lesser of two' },
	{ value: 'between', label: 'Straight between sizes' },
];

const terms: readonly { value: TypedLimit['first']['of']; label: string }[] = [
	{ value: 'mm', label: 'millimetres' },
	{ value: 'height', label: 'height over n' },
	{ value: 'length', label: 'length over n' },
	{ value: 'thickness', label: 'thickness over n' },
];

/** One side of a rule's limits; only the fields of the kind that is chosen are shown. */
export function LimitFields({ name, legend, mayTurn }: { name: SideName; legend: string; mayTurn: boolean }) {
	const typed = useWatch<TypedSheet, SideName>({ name });
	const isTwo = typed.kind === 'greater' || typed.kind === 'lesser';
	const isBareNumber = typed.kind === 'term' && typed.first.of === 'mm';
	return (
		<fieldset className="m-0 flex min-w-0 flex-col gap-2.5 border-0 p-0">
			<legend className="mb-1 p-0 font-strong">{legend}</legend>
			<SelectField name={`${name}.kind`} label="Kind of limit" options={kinds} />
			{(typed.kind === 'term' || isTwo) && <TermFields name={`${name}.first`} of={typed.first.of} label={isTwo ? 'First' : 'Limit'} />}
			{isTwo && (
				<>
					<TermFields name={`${name}.second`} of={typed.second.of} label="Second" />
					<NumberField name={`${name}.atMost`} label="At most" unit="mm" isOptional hint="Empty: no cap." />
				</>
			)}
			{typed.kind === 'between' && <PointFields name={name} />}
			{mayTurn && typed.kind !== 'none' && !isBareNumber && <TickField name={`${name}.isMinus`} label="Counts on the minus side" />}
		</fieldset>
	);
}

function TermFields({ name, of, label }: { name: string; of: TypedLimit['first']['of']; label: string }) {
	return (
		<div className="grid grid-cols-2 items-start gap-2.5">
			<SelectField name={`${name}.of`} label={`${label} in`} options={terms} />
			<NumberField name={`${name}.value`} label={of === 'mm' ? 'Millimetres' : 'n'} unit={of === 'mm' ? 'mm' : ''} isOptional />
		</div>
	);
}

function PointFields({ name }: { name: SideName }) {
	const { control } = useFormContext<TypedSheet>();
	const { fields, append, remove } = useFieldArray<TypedSheet, `${SideName}.points`, 'key'>({
		control,
		name: `${name}.points`,
		keyName: 'key',
	});
	return (
		<>
			<SelectField
				name={`${name}.of`}
				label="Between sizes of its"
				options={[
					{ value: 'thickness', label: 'thickness' },
					{ value: 'height', label: 'height' },
					{ value: 'length', label: 'length' },
				]}
			/>
			{fields.map((field, index) => (
				<div key={field.key} className="grid grid-cols-[1fr_1fr_auto] items-end gap-2.5">
					<NumberField name={`${name}.points.${index}.sizeMm`} label="At a size of" unit="mm" isOptional />
					<NumberField name={`${name}.points.${index}.limitMm`} label="the limit is" unit="mm" isOptional />
					<Button
						aria-label={`Leave out size ${index + 1}`}
						whyNot={fields.length > 2 ? null : 'A line needs two sizes.'}
						onClick={() => remove(index)}
					>
						Out
					</Button>
				</div>
			))}
			<Button className="self-start" onClick={() => append({ sizeMm: null, limitMm: null })}>
				Another size
			</Button>
		</>
	);
}
