import { Children, type ReactNode } from 'react';

interface StripProps {
	/** Each one thing the page rests on; falsy ones are left out. */
	items: readonly (ReactNode | null | false | undefined)[];
}

/** Above the title: what the page rests on, and whether that is the newest. Use <b> for what must not be missed: "trial, not published". */
export function Strip({ items }: StripProps) {
	return (
		<ul className="m-0 mb-2 flex min-h-5 list-none flex-wrap items-center gap-x-4.5 gap-y-0.5 p-0 text-strip text-second [&_a]:inline-flex [&_a]:min-h-6 [&_a]:items-center [&_b]:text-ink">
			{Children.map(items, (item) => (item ? <li>{item}</li> : null))}
		</ul>
	);
}
