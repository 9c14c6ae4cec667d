import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { z } from 'zod';
import { pourForm } from '#shared/pour/contract.ts';
import { api } from '#src/lib/api.ts';
import { fieldMoment, siteMoment } from '#src/lib/site-moment.ts';
import { SelectField, TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

interface PourFormProps {
	siteId: string;
	companies: readonly { companyId: string; name: string }[];
	modelId: string;
	/** Which kinds of element stand on which storey, and how many. */
	kinds: readonly { storey: string; class: string; elementCount: number }[];
	timeZone: string;
	onAdded: () => void;
}

const fields = pourForm.pick({ number: true, name: true, companyId: true }).extend({
	/** By the site's clock. Empty: not planned yet. */
	planned: z.union([z.literal(''), fieldMoment]),
});

/** A pour: what is concreted together, by whom and when. */
export function PourForm({ siteId, companies, modelId, kinds, timeZone, onAdded }: PourFormProps) {
	const [taken, setTaken] = useState<ReadonlySet<string>>(new Set());
	const queries = useQueryClient();
	const add = useMutation(api.pour.add.mutationOptions());
	const chosen = kinds.filter((kind) => taken.has(keyOf(kind)));
	const count = chosen.reduce((sum, kind) => sum + kind.elementCount, 0);
	const toggle = (key: string) =>
		setTaken((before) => {
			const after = new Set(before);
			if (!after.delete(key)) after.add(key);
			return after;
		});
	return (
		<Form
			schema={fields}
			values={{ number: '', name: '', companyId: companies[0]?.companyId ?? '', planned: '' }}
			onSubmit={async ({ planned, ...said }) => {
				await add.mutateAsync({
					siteId,
					pour: {
						...said,
						plannedAt: planned === '' ? null : siteMoment(planned, timeZone),
						modelId,
						elements: chosen.map(({ storey, class: elementClass }) => ({ storey, class: elementClass })),
					},
				});
				await Promise.all([api.pour.key(), api.site.key(), api.check.key()].map((queryKey) => queries.invalidateQueries({ queryKey })));
				onAdded();
			}}
		>
			<div className="grid gap-4 tablet:grid-cols-2">
				<TextField name="number" label="Number" hint="7, 7b …" />
				<TextField name="name" label="Name" hint="Ground columns" />
				<SelectField
					name="companyId"
					label="Company"
					options={companies.map(({ companyId, name }) => ({ value: companyId, label: name }))}
				/>
				<PlannedField />
			</div>
			<fieldset className="m-0 border-0 p-0">
				<legend className="mb-1 p-0 font-medium">What is concreted together</legend>
				<div className="grid gap-x-6 tablet:grid-cols-2">
					{kinds.map((kind) => (
						<label key={keyOf(kind)} className="flex min-h-11 items-center gap-3 pointer-coarse:min-h-12">
							<input type="checkbox" className="size-5 accent-ink" checked={taken.has(keyOf(kind))} onChange={() => toggle(keyOf(kind))} />
							<span>
								{kind.class.replace(/^Ifc/, '')}, {kind.storey || 'no storey'} <span className="text-second">{kind.elementCount}</span>
							</span>
						</label>
					))}
				</div>
			</fieldset>
			<Submit whyNot={count === 0 ? 'Choose at least one kind of element.' : null}>
				{count === 0 ? 'Add the pour' : `Add the pour of ${count} elements`}
			</Submit>
		</Form>
	);
}

function PlannedField() {
	return <TextField name="planned" type="datetime-local" label="Concrete planned" hint="By the site’s clock; may stay empty" isMono />;
}

function keyOf({ storey, class: elementClass }: { storey: string; class: string }): string {
	return `${storey}\u0000${elementClass}`;
}
