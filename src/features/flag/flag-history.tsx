import { z } from 'zod';
import { plainText } from '#shared/base-contract.ts';
import type { FlagEvent } from '#shared/flag/contract.ts';
import { moment } from '#src/lib/format.ts';
import { useNow } from '#src/lib/now.ts';
import { LongTextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

/** All that was said and done on a flag, oldest first, and a place to say something. */
export function FlagHistory({
	events,
	timeZone,
	onSay,
}: {
	events: readonly FlagEvent[];
	timeZone: string;
	/** Absent for who only looks on. */
	onSay?: (text: string) => Promise<unknown>;
}) {
	const now = useNow();
	return (
		<section aria-labelledby="flag-history">
			<h2 id="flag-history" className="m-0 mt-5 mb-2 text-h2 font-strong">
				What was said
			</h2>
			<ol className="m-0 mb-4 flex list-none flex-col border-t border-t-rule p-0">
				{events.map((event) => (
					<li key={`${event.at.getTime()} ${event.words}`} className="border-b border-b-rule py-2">
						<span className="font-medium">{event.words}</span>
						{event.text && <span className="block">{event.text}</span>}
						<span className="block text-small text-second">
							{event.by ? `${event.by}, ` : ''}
							{moment(event.at, timeZone, now)}
						</span>
					</li>
				))}
			</ol>
			{onSay && (
				<Form
					key={events.length}
					schema={z.object({ text: plainText(2000) })}
					values={{ text: '' }}
					onSubmit={async ({ text }) => onSay(text)}
				>
					<LongTextField name="text" label="Say something" rows={2} />
					<Submit>Say it</Submit>
				</Form>
			)}
		</section>
	);
}
