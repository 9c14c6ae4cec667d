import { type ReactNode, useEffect, useRef } from 'react';
import { useLocation } from 'react-router-dom';

interface HeadlineProps {
	/** A sentence that says the consequence: "Pour 7 is not ready: 6 elements off". Also the document's title, unless `title` is given. */
	children: string;
	title?: string;
	/** Buttons at the right; on a phone at the foot of the screen. */
	acts?: ReactNode;
}

/** The arrival that was last answered, so that coming back to life on the same page does not take the focus away. */
let answeredArrival = 'default';

/** The page's title. Takes the focus after a move to another page, so that a screen reader and the keyboard begin here. */
export function Headline({ children, title, acts }: HeadlineProps) {
	const { key, pathname } = useLocation();
	const heading = useRef<HTMLHeadingElement>(null);
	useEffect(() => {
		const arrival = pathname;
		if (key !== 'default' && answeredArrival !== arrival) heading.current?.focus({ preventScroll: true });
		answeredArrival = arrival;
	}, [key, pathname]);
	return (
		<div className="mb-2 flex flex-wrap items-center gap-x-6 gap-y-2">
			<title>{`${title ?? children} · Batterboard`}</title>
			<h1
				ref={heading}
				tabIndex={-1}
				className="m-0 max-w-[70ch] flex-1 basis-80 text-h1-phone leading-[1.2] font-strong tracking-[-0.015em] tablet:text-h1"
			>
				{children}
			</h1>
			{acts && <ActBar>{acts}</ActBar>}
		</div>
	);
}

/** Where a page's acts stand: beside the title, on a phone fixed to its foot, within reach of a thumb. */
function ActBar({ children }: { children: ReactNode }) {
	return (
		<div className="flex flex-wrap gap-2.5 max-tablet:fixed max-tablet:inset-x-0 max-tablet:bottom-0 max-tablet:z-10 max-tablet:border-t max-tablet:border-rule max-tablet:bg-sheet max-tablet:px-4 max-tablet:pt-2.5 max-tablet:pb-[max(0.625rem,env(safe-area-inset-bottom))] max-tablet:[&>*]:min-h-12 max-tablet:[&>*]:flex-1">
			{children}
		</div>
	);
}
