import type { Board } from '#shared/site/board-schema.ts';
import { moment } from '#src/lib/format.ts';

interface WaitingOnOthersProps {
	waiting: Board['waiting'];
	timeZone: string;
	now: Date;
}

/** Who is awaited, for what, and by when or since when. */
export function WaitingOnOthers({ waiting, timeZone, now }: WaitingOnOthersProps) {
	return (
		<section aria-labelledby="waiting" className="pt-1">
			<h2 id="waiting" className="m-0 mb-2 text-h2 font-strong">
				Waiting on others
			</h2>
			{waiting.length === 0 ? (
				<p className="m-0 text-second">On nobody.</p>
			) : (
				<ul className="m-0 list-none p-0">
					{waiting.map(({ who, what, since, by }) => (
						<li key={`${who} ${what}`} className="py-1 text-second">
							{who}: {what}
							{by !== null ? `, by ${moment(by, timeZone, now)}` : since !== null ? `, since ${moment(since, timeZone, now)}` : ''}
						</li>
					))}
				</ul>
			)}
		</section>
	);
}
