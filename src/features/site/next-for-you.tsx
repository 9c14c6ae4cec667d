import type { BoardAct } from '#shared/site/board-schema.ts';
import { moment } from '#src/lib/format.ts';
import { ButtonLink } from '#src/ui/button.tsx';

interface NextForYouProps {
	siteId: string;
	acts: readonly BoardAct[];
	timeZone: string;
	now: Date;
}

/** The acts that wait for one: the verb on the button, why, and by when. */
export function NextForYou({ siteId, acts, timeZone, now }: NextForYouProps) {
	if (acts.length === 0) return <p className="m-0 border-y border-rule py-4 text-second">Nothing waits for you here.</p>;
	return (
		<ol className="m-0 list-none p-0">
			{acts.map((act, index) => (
				<li
					key={`${act.verb} ${act.path}`}
					className="flex min-h-14 flex-wrap items-center gap-x-4 gap-y-1 border-b border-rule py-1.5 max-tablet:py-3"
				>
					<ButtonLink to={`/sites/${siteId}/${act.path}`} weight={index === 0 ? 'act' : 'quiet'} className="w-full tablet:w-58">
						{act.verb}
					</ButtonLink>
					<span className="min-w-0 flex-1 basis-60">{act.why}</span>
					{act.by !== null && (
						<span className="font-medium whitespace-nowrap">
							{act.isBefore ? 'before ' : act.by < now ? 'since ' : 'by '}
							{moment(act.by, timeZone, now)}
						</span>
					)}
				</li>
			))}
		</ol>
	);
}
