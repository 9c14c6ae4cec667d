import { ButtonLink } from '#src/ui/button.tsx';
import type { NextAct } from './next-acts.ts';

interface NextForYouProps {
	siteId: string;
	acts: readonly NextAct[];
	/** The next concrete, in words: "Thu 4 Dec 07:00"; null where none is planned. */
	nextPour: string | null;
}

/** The acts that wait for one: the verb on the button, why, and by when. */
export function NextForYou({ siteId, acts, nextPour }: NextForYouProps) {
	if (acts.length === 0) return <p className="m-0 border-y border-rule py-4 text-second">Nothing waits for you here.</p>;
	return (
		<ol className="m-0 list-none p-0">
			{acts.map((act, index) => (
				<li key={act.verb} className="flex min-h-14 flex-wrap items-center gap-x-4 gap-y-1 border-b border-rule py-1.5 max-tablet:py-3">
					<ButtonLink to={`/sites/${siteId}/${act.path}`} weight={index === 0 ? 'act' : 'quiet'} className="w-full tablet:w-58">
						{act.verb}
					</ButtonLink>
					<span className="min-w-0 flex-1 basis-60">{act.why}</span>
					{act.isBeforePour && nextPour !== null && <span className="font-medium whitespace-nowrap">before {nextPour}</span>}
				</li>
			))}
		</ol>
	);
}
