import { useMutation, useQueryClient } from '@tanstack/react-query';
import { z } from 'zod';
import { plainText } from '#shared/base-contract.ts';
import { emailAddress } from '#shared/site/people-contract.ts';
import { api } from '#src/lib/api.ts';
import { Button } from '#src/ui/button.tsx';
import { SelectField, TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

const foundSiteInput = z.object({ name: plainText(80), timeZone: plainText(60), ownersContact: z.literal('').or(emailAddress) });

/** The zone of this device first, then all that the browser knows. */
function timeZones(): { value: string; label: string }[] {
	const here = Intl.DateTimeFormat().resolvedOptions().timeZone;
	const known = new Set([here, 'UTC', ...Intl.supportedValuesOf('timeZone')]);
	return [...known].map((zone) => ({ value: zone, label: zone.replaceAll('_', ' ') }));
}

interface FoundSiteFormProps {
	onFounded: (siteId: string) => void;
	onLeave?: () => void;
}

/** A new site: its name and its clock. */
export function FoundSiteForm({ onFounded, onLeave }: FoundSiteFormProps) {
	const queries = useQueryClient();
	const found = useMutation(
		api.site.found.mutationOptions({
			onSuccess: async (site) => {
				await queries.invalidateQueries({ queryKey: api.site.key() });
				onFounded(site.siteId);
			},
		}),
	);
	return (
		<Form
			schema={foundSiteInput}
			values={{ name: '', timeZone: Intl.DateTimeFormat().resolvedOptions().timeZone, ownersContact: '' }}
			onSubmit={({ ownersContact, ...rest }) => found.mutateAsync({ ...rest, ownersContact: ownersContact === '' ? null : ownersContact })}
			className="max-w-120"
		>
			<TextField name="name" label="Name of the site" hint="As people on it call it." />
			<SelectField name="timeZone" label="Time zone" hint="All hours on this site are written in it." options={timeZones()} />
			<TextField
				name="ownersContact"
				type="email"
				label="The owner’s contact, by e-mail"
				hint="Is invited as the first owner’s representative, who names all others. May stay empty for now."
			/>
			<Submit
				next="You become its site engineer and project engineer. It begins with a starter sheet of tolerances, issued."
				beside={onLeave && <Button onClick={onLeave}>Leave it</Button>}
			>
				Found the site
			</Submit>
		</Form>
	);
}
