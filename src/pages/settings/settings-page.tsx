import { useSuspenseQuery } from '@tanstack/react-query';
import type { SiteSettings } from '#shared/site/site-settings.ts';
import { SettingsForm, weekdays } from '#src/features/site/settings-form.tsx';
import { api } from '#src/lib/api.ts';
import { useAddressId, useMay } from '#src/lib/session.ts';
import { Headline } from '#src/ui/headline.tsx';

/** What the site has agreed for itself: the project engineer changes it, everybody reads it. */
export default function SettingsPage() {
	const siteId = useAddressId('siteId');
	const { data } = useSuspenseQuery(api.site.settings.queryOptions({ input: { siteId } }));
	const mayWrite = useMay('site.write');
	return (
		<>
			<Headline title="Site settings">What this site has agreed</Headline>
			{mayWrite ? (
				<SettingsForm key={data.version} siteId={siteId} settings={data.settings} version={data.version} />
			) : (
				<Agreed settings={data.settings} />
			)}
		</>
	);
}

function Agreed({ settings }: { settings: SiteSettings }) {
	const { calendar, checkpoints } = settings;
	const kinds = (['plan', 'face', 'level'] as const).filter((kind) => checkpoints.kinds[kind]);
	const lines: [string, string][] = [
		['Time zone', settings.timeZone.replaceAll('_', ' ')],
		['Working days', calendar.workingDays.map((day) => weekdays[day - 1]).join(', ')],
		['Hours', `${calendar.startsAt} to ${calendar.endsAt}`],
		['Holidays', calendar.holidays.length === 0 ? 'none' : calendar.holidays.join(', ')],
		['Fits', settings.isFitCheckedBySecond ? 'each is checked by a second person' : 'no second person is asked'],
		['Concessions', settings.needsOwnersConsent ? 'need the owner’s representative’s consent' : 'are the project engineer’s alone'],
		['Second factor', settings.needsSecondFactor ? 'asked of who signs, adopts or issues' : 'not asked'],
		['New tolerance sheets', settings.defaultDecision],
		['Checkpoints', `${kinds.join(', ')}; every ${checkpoints.faceSpacingM} m on faces, ${checkpoints.levelSpacingM} m on levels`],
	];
	return (
		<>
			<dl className="m-0 max-w-150 border-t border-rule">
				{lines.map(([term, said]) => (
					<div key={term} className="flex flex-wrap gap-x-4 border-b border-rule py-2.5">
						<dt className="w-50 text-second">{term}</dt>
						<dd className="m-0 min-w-0 flex-1 basis-60">{said}</dd>
					</div>
				))}
			</dl>
			<p className="text-second">The project engineer changes them; each change stands on the record.</p>
		</>
	);
}
