import { keepPreviousData, useQuery } from '@tanstack/react-query';
import { useEffect, useRef, useState } from 'react';
import { useFormContext, useWatch } from 'react-hook-form';
import { extractCaution } from '#shared/tolerance/published-extracts.ts';
import type { ToleranceSheet } from '#shared/tolerance/sheet-schema.ts';
import { api, client } from '#src/lib/api.ts';
import { Choice } from '#src/ui/choice.tsx';
import { TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';
import { useKnownWords } from './known-words.ts';
import { RuleList, type TypedWeight } from './rule-list.tsx';
import { sheetAsTyped, sheetForm, type TypedSheet } from './typed-sheet.ts';

interface SheetFormProps {
	siteId: string;
	sheetId: string;
	sheet: ToleranceSheet;
	/** What was read, so that nothing of another's is written over. */
	contentSha256: string;
	/** After it was kept. */
	onKept: () => Promise<unknown>;
	/** Whether something typed is not kept yet. */
	onTyped: (isUnkept: boolean) => void;
}

/** A draft as a form over the one schema of sheets: kept whole, weighed as it is typed. */
export function SheetForm({ siteId, sheetId, sheet, contentSha256, onKept, onTyped }: SheetFormProps) {
	// Each keeping answers what the next one begins from; only an opening of the page takes another person's.
	const seen = useRef(contentSha256);
	const [values] = useState(() => sheetAsTyped(sheet));
	return (
		<Form
			schema={sheetForm}
			values={values}
			onSubmit={async (typed) => {
				const kept = await client.tolerance.saveDraft({ siteId, sheetId, seenSha256: seen.current, sheet: typed });
				seen.current = kept.contentSha256;
				await onKept();
			}}
		>
			<TextField name="name" label="Name of the sheet" className="max-w-120" />
			<Choice
				name="decision"
				legend="Decision rule"
				isRow
				options={[
					{ value: 'guarded', label: 'Guarded', detail: 'With the uncertainty: too close to call where it cannot be told.' },
					{ value: 'simple', label: 'Simple', detail: 'By the deviation alone, at shared risk: on the limit up to 50 % wrong.' },
				]}
			/>
			<Rules siteId={siteId} sheet={sheet} onTyped={onTyped} />
		</Form>
	);
}

function Rules({ siteId, sheet, onTyped }: Pick<SheetFormProps, 'siteId' | 'sheet' | 'onTyped'>) {
	const form = useFormContext<TypedSheet>();
	const known = useKnownWords(siteId);
	const { isDirty, isSubmitSuccessful, submitCount } = form.formState;
	const weight = useWeightAsTyped(siteId, sheet);
	useEffect(() => onTyped(isDirty), [isDirty, onTyped]);
	// What was kept is what is compared with from then on.
	useEffect(() => {
		if (isSubmitSuccessful && submitCount > 0) form.reset(form.getValues(), { keepSubmitCount: true });
	}, [isSubmitSuccessful, submitCount, form]);
	return (
		<>
			<RuleList weight={weight} known={known} />
			<Submit
				next={isDirty ? 'Not kept yet. Kept, it is still a draft: nobody is told, nothing is judged by it.' : `Kept. ${extractCaution}`}
			>
				Keep the draft
			</Submit>
		</>
	);
}

/** What the sheet as typed would decide, half a second after the last key; of what is not whole the last whole one stands. */
function useWeightAsTyped(siteId: string, sheet: ToleranceSheet): TypedWeight | null {
	const typed = useWatch<TypedSheet>();
	const [whole, setWhole] = useState(sheet);
	useEffect(() => {
		const timer = setTimeout(() => {
			const read = sheetForm.safeParse(typed);
			if (read.success) setWhole((before) => (JSON.stringify(before) === JSON.stringify(read.data) ? before : read.data));
		}, 500);
		return () => clearTimeout(timer);
	}, [typed]);
	const { data } = useQuery({
		queryKey: [...api.tolerance.weigh.key(), 'as typed', siteId, whole],
		queryFn: async (): Promise<TypedWeight> => {
			const weight = await client.tolerance.weigh({ siteId, sheet: whole });
			return { weight, decidesOf: new Map(whole.rules.map(({ id }, index) => [id, weight.decides[index] ?? 0])) };
		},
		placeholderData: keepPreviousData,
	});
	return data ?? null;
}
