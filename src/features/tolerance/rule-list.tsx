import { useEffect, useRef, useState } from 'react';
import { get, useFieldArray, useFormContext } from 'react-hook-form';
import type { SheetWeight } from '#shared/tolerance/contract.ts';
import { Button } from '#src/ui/button.tsx';
import { NoRule } from './no-rule.tsx';
import type { KnownWords } from './rule-fields.tsx';
import { RuleRow } from './rule-row.tsx';
import { StarterRules } from './starter-rules.tsx';
import { freeRuleId, newRule, ruleAsTyped, type TypedRule, type TypedSheet } from './typed-sheet.ts';

/** What a sheet would decide, counted for each rule by its id: rules move while it is counted. */
export interface TypedWeight {
	weight: SheetWeight;
	decidesOf: ReadonlyMap<string, number>;
}

/** A draft's rules in their order, each to change, move, copy or delete, and what begins new ones. */
export function RuleList({ weight, known }: { weight: TypedWeight | null; known: KnownWords }) {
	const form = useFormContext<TypedSheet>();
	const { fields, append, insert, remove, move } = useFieldArray<TypedSheet, 'rules', 'key'>({
		control: form.control,
		name: 'rules',
		keyName: 'key',
	});
	const [openId, setOpenId] = useState<string | null>(null);
	const [said, setSaid] = useState('');
	const list = useRef<HTMLOListElement>(null);
	const idAt = (index: number): string => form.getValues(`rules.${index}.id`);
	const takenIds = (): string[] => form.getValues('rules').map(({ id }) => id);
	const { submitCount, errors } = form.formState;
	// A failed send opens the first rule that has a fault, once for each send.
	const answered = useRef(0);
	useEffect(() => {
		if (submitCount === answered.current) return;
		const faulty = form.getValues('rules').findIndex((_, index) => get(errors, `rules.${index}`) !== undefined);
		if (faulty < 0) return;
		answered.current = submitCount;
		setOpenId(form.getValues(`rules.${faulty}.id`));
		requestAnimationFrame(() => list.current?.querySelector<HTMLElement>('[aria-invalid="true"]')?.focus());
	}, [submitCount, errors, form]);
	const begin = (rule: TypedRule): void => {
		append(rule, { shouldFocus: false });
		setOpenId(rule.id);
		setSaid(`Rule ${fields.length + 1} is begun, at the end.`);
	};
	return (
		<section aria-labelledby="rules-of-draft" className="flex flex-col gap-3">
			<h2 id="rules-of-draft" className="m-0 text-h2 font-strong">
				Rules
			</h2>
			<p className="m-0 text-second">The first rule that fits decides: put the narrower ones first.</p>
			{fields.length === 0 && <p className="m-0">No rule yet: the sheet decides nothing.</p>}
			<ol ref={list} className="m-0 flex list-none flex-col gap-3 p-0">
				{fields.map((field, index) => (
					<RuleRow
						key={field.key}
						index={index}
						ruleCount={fields.length}
						decides={weight?.decidesOf.get(idAt(index)) ?? null}
						known={known}
						isOpen={openId === idAt(index)}
						onOpen={(isOpen) => setOpenId(isOpen ? idAt(index) : null)}
						onMove={(to) => {
							move(index, to);
							setSaid(`Rule ${index + 1} is now rule ${to + 1}.`);
						}}
						onCopy={() => {
							const copy = { ...structuredClone(form.getValues(`rules.${index}`)), id: freeRuleId(takenIds()) };
							insert(index + 1, copy, { shouldFocus: false });
							setOpenId(copy.id);
							setSaid(`Rule ${index + 2} is a copy of rule ${index + 1}.`);
						}}
						onDelete={() => {
							remove(index);
							setSaid(`Rule ${index + 1} is deleted; kept once the draft is kept.`);
						}}
					/>
				))}
			</ol>
			<p role="status" className="sr-only">
				{said}
			</p>
			<div className="flex flex-wrap gap-2.5">
				<Button onClick={() => begin(newRule(takenIds()))}>Add a rule</Button>
				<StarterRules
					onAdd={(rules) => {
						const taken = takenIds();
						for (const rule of rules) {
							const id = taken.includes(rule.id) ? freeRuleId(taken) : rule.id;
							taken.push(id);
							append({ ...ruleAsTyped(rule), id }, { shouldFocus: false });
						}
						setSaid(`${rules.length} published rules are added at the end.`);
					}}
				/>
			</div>
			{weight !== null && <NoRule weight={weight.weight} onBegin={(about) => begin(newRule(takenIds(), about))} />}
		</section>
	);
}
