import { useMutation, useQueryClient } from '@tanstack/react-query';
import { z } from 'zod';
import { type SiteSettings, siteSettings } from '#shared/site/site-settings.ts';
import { api } from '#src/lib/api.ts';
import { LongTextField, NumberField, SelectField, TextField, TickField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

export const weekdays = ['Monday', 'Tuesday', 'Wednesday', 'Thursday', 'Friday', 'Saturday', 'Sunday'] as const;

/** The settings as a person ticks and types them. */
const typed = z.object({
	...siteSettings.shape,
	calendar: z.object({ ...siteSettings.shape.calendar.shape, workingDays: z.array(z.boolean()), holidays: z.string().max(6000) }),
});
const schema = typed
	.transform(({ calendar, ...rest }) => ({
		...rest,
		calendar: {
			...calendar,
			workingDays: calendar.workingDays.flatMap((isWorked, index) => (isWorked ? [index + 1] : [])),
			holidays: calendar.holidays.split(/[\s,;]+/).filter((word) => word !== ''),
		},
	}))
	.pipe(siteSettings);

function asTyped(settings: SiteSettings): z.input<typeof typed> {
	const { calendar } = settings;
	return {
		...settings,
		calendar: {
			...calendar,
			workingDays: weekdays.map((_, index) => calendar.workingDays.includes(index + 1)),
			holidays: calendar.holidays.join('\n'),
		},
	};
}

interface SettingsFormProps {
	siteId: string;
	settings: SiteSettings;
	version: number;
}

/** All that a site agrees for itself, changed at once. */
export function SettingsForm({ siteId, settings, version }: SettingsFormProps) {
	const queries = useQueryClient();
	const save = useMutation(
		api.site.saveSettings.mutationOptions({ onSuccess: () => queries.invalidateQueries({ queryKey: api.site.key() }) }),
	);
	const zones = [...new Set([settings.timeZone, 'UTC', ...Intl.supportedValuesOf('timeZone')])];
	return (
		<Form
			schema={schema}
			values={asTyped(settings)}
			onSubmit={(wanted) => save.mutateAsync({ siteId, settings: wanted, version })}
			className="max-w-150"
		>
			<h2 className="m-0 text-h2 font-strong">Working time</h2>
			<SelectField name="timeZone" label="Time zone" options={zones.map((zone) => ({ value: zone, label: zone.replaceAll('_', ' ') }))} />
			<fieldset className="m-0 flex flex-wrap gap-x-5 border-0 p-0">
				<legend className="p-0 font-medium">Working days</legend>
				{weekdays.map((day, index) => (
					<TickField key={day} name={`calendar.workingDays.${index}`} label={day} />
				))}
			</fieldset>
			<div className="flex flex-wrap gap-4">
				<TextField name="calendar.startsAt" label="Work begins" hint="As 07:00." />
				<TextField name="calendar.endsAt" label="Work ends" hint="As 17:00." />
			</div>
			<LongTextField name="calendar.holidays" label="Holidays" hint="Dates as 2026-12-25, one a line. Deadlines count none of them." />
			<h2 className="m-0 mt-3 text-h2 font-strong">Who agrees to what</h2>
			<TickField
				name="isFitCheckedBySecond"
				label="A second person checks each fit"
				hint="Without, every page that rests on a fit says that nobody checked it."
			/>
			<TickField name="needsOwnersConsent" label="A concession needs the owner’s representative’s consent" />
			<TickField
				name="needsSecondFactor"
				label="Who signs, adopts or issues shows a second factor"
				hint="Codes of an app, or a passkey; each sets up their own under their account."
			/>
			<SelectField
				name="defaultDecision"
				label="Decision rule of new tolerance sheets"
				options={[
					{ value: 'guarded', label: 'Guarded: with the uncertainty, too close to call where it cannot be told' },
					{ value: 'simple', label: 'Simple: by the deviation alone, at shared risk' },
				]}
			/>
			<h2 className="m-0 mt-3 text-h2 font-strong">Checkpoints of new revisions</h2>
			<div className="flex flex-wrap gap-4">
				<NumberField name="checkpoints.faceSpacingM" label="Widest step on faces" unit="m" />
				<NumberField name="checkpoints.levelSpacingM" label="Widest step on levels" unit="m" />
			</div>
			<fieldset className="m-0 flex flex-wrap gap-x-5 border-0 p-0">
				<legend className="p-0 font-medium">Kinds</legend>
				<TickField name="checkpoints.kinds.plan" label="Plan" />
				<TickField name="checkpoints.kinds.face" label="Face" />
				<TickField name="checkpoints.kinds.level" label="Level" />
			</fieldset>
			<Submit next={save.isSuccess ? 'Kept, and on the record.' : 'Each change stands in the record of acts. Deadlines already set stay.'}>
				Keep the settings
			</Submit>
		</Form>
	);
}
