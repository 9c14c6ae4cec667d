import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { z } from 'zod';
import type { ShownPour } from '#shared/record/sealed-record.ts';
import { api } from '#src/lib/api.ts';
import { counted } from '#src/lib/format.ts';
import { fieldMoment, fieldTextOf, siteMoment } from '#src/lib/site-moment.ts';
import { ChoiceGroup } from '#src/ui/choice.tsx';
import { TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

interface ConcreteFormProps {
	siteId: string;
	pourId: string;
	/** `begin`: the first concrete; `end`: the last. */
	act: 'begin' | 'end';
	elements: ShownPour['elements'];
	timeZone: string;
	now: Date;
	/** With the pour that takes what was not cast, where there is one. */
	onDone: (restPourId: string | null) => void;
}

const schema = z.object({ at: fieldMoment });
const keyOf = ({ modelId, globalId }: { modelId: string; globalId: string }): string => `${modelId} ${globalId}`;

/** Concreting from, and to: cast whole, or in part, what was not cast being chosen one by one. */
export function ConcreteForm({ siteId, pourId, act, elements, timeZone, now, onDone }: ConcreteFormProps) {
	const queries = useQueryClient();
	const [extent, setExtent] = useState<'whole' | 'part'>('whole');
	const [notCast, setNotCast] = useState<ReadonlySet<string>>(new Set());
	const begin = useMutation(api.pour.beginConcreting.mutationOptions());
	const end = useMutation(api.pour.endConcreting.mutationOptions());
	const isPart = act === 'end' && extent === 'part';
	const rest = isPart ? elements.filter((element) => notCast.has(keyOf(element))) : [];
	const whyNot = !isPart
		? null
		: rest.length === 0
			? 'Choose what was not cast.'
			: rest.length === elements.length
				? 'Then nothing was cast: leave something out of it.'
				: null;
	return (
		<Form
			schema={schema}
			values={{ at: fieldTextOf(now, timeZone) }}
			onSubmit={async ({ at }) => {
				const when = siteMoment(at, timeZone);
				let restPourId: string | null = null;
				if (act === 'begin') await begin.mutateAsync({ siteId, pourId, at: when });
				else {
					const left = rest.map(({ modelId, globalId }) => ({ modelId, globalId }));
					({ restPourId } = await end.mutateAsync({ siteId, pourId, at: when, notCast: left }));
				}
				await Promise.all([api.pour.key(), api.site.key()].map((queryKey) => queries.invalidateQueries({ queryKey })));
				onDone(restPourId);
			}}
		>
			<TextField
				name="at"
				type="datetime-local"
				label={act === 'begin' ? 'Concrete begins' : 'Concrete ends'}
				hint="By the site’s clock"
				isMono
			/>
			{act === 'end' && (
				<ChoiceGroup<'whole' | 'part'>
					legend="What was cast"
					value={extent}
					onChange={setExtent}
					options={[
						{ value: 'whole', label: `All of it, ${counted(elements.length, 'element')}` },
						{ value: 'part', label: 'A part', detail: 'The rest becomes a pour of its own.' },
					]}
					isRow
				/>
			)}
			{isPart && (
				<fieldset className="m-0 max-h-72 overflow-y-auto border-0 border-y border-y-rule p-0">
					<legend className="mb-1 p-0 font-medium">Not cast: {counted(rest.length, 'element')}</legend>
					{elements.map((element) => (
						<label key={keyOf(element)} className="flex min-h-12 items-center gap-3 border-b border-hair">
							<input
								type="checkbox"
								className="size-5 shrink-0 accent-ink"
								checked={notCast.has(keyOf(element))}
								onChange={() =>
									setNotCast((before) => {
										const after = new Set(before);
										if (!after.delete(keyOf(element))) after.add(keyOf(element));
										return after;
									})
								}
							/>
							<span>
								{element.title || element.mark} <span className="text-second">{element.storey}</span>
							</span>
						</label>
					))}
				</fieldset>
			)}
			<Submit whyNot={whyNot}>
				{act === 'begin' ? 'Concrete has begun' : isPart ? `Cast, all but ${counted(rest.length, 'element')}` : 'Cast, all of it'}
			</Submit>
		</Form>
	);
}
