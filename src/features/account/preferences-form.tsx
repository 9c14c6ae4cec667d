import { useMutation, useQueryClient, useSuspenseQuery } from '@tanstack/react-query';
import { preferences } from '#shared/account/preferences.ts';
import { api } from '#src/lib/api.ts';
import { chooseColourSet } from '#src/lib/colour-set.ts';
import { chooseReading } from '#src/lib/reading.ts';
import { SelectField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

const colourSets = [
	{ value: 'device', label: 'As the device' },
	{ value: 'light', label: 'Light' },
	{ value: 'dark', label: 'Dark' },
	{ value: 'sun', label: 'Sun: ink on white' },
];
const marks = [
	{ value: '.', label: 'Point: 12.5' },
	{ value: ',', label: 'Comma: 12,5' },
];
const languages = [
	{ value: 'en', label: 'English' },
	{ value: 'de', label: 'Deutsch' },
	{ value: 'fr', label: 'Français' },
	{ value: 'es', label: 'Español' },
	{ value: 'it', label: 'Italiano' },
	{ value: 'pt', label: 'Português' },
	{ value: 'nl', label: 'Nederlands' },
	{ value: 'pl', label: 'Polski' },
];
const notices = [
	{ value: 'at-once', label: 'As they come, lesser ones each morning' },
	{ value: 'digest', label: 'All gathered, each morning' },
	{ value: 'none', label: 'Only what must be told' },
];

/** How one reads the product, on every device. */
export function PreferencesForm() {
	const queries = useQueryClient();
	const { data } = useSuspenseQuery(api.account.preferences.queryOptions());
	const save = useMutation(
		api.account.savePreferences.mutationOptions({
			onSuccess: (saved) => {
				chooseColourSet(saved.colourSet);
				chooseReading(saved);
				queries.setQueryData(api.account.preferences.queryKey(), saved);
			},
		}),
	);
	return (
		<Form schema={preferences} values={data} onSubmit={save.mutateAsync} className="max-w-120">
			<SelectField name="colourSet" label="Colours" options={colourSets} />
			<SelectField name="decimalMark" label="Decimal mark" options={marks} />
			<SelectField name="dateLanguage" label="Days and months in" options={languages} />
			<SelectField name="notices" label="Notices by mail" hint="What stops a pour is always told at once." options={notices} />
			<Submit next={save.isSuccess ? 'Kept.' : 'Kept at the server, for all your devices.'}>Keep these</Submit>
		</Form>
	);
}
