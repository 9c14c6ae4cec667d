import type { ReactNode } from 'react';

/** wrong: something failed. stale: it stands on what is no longer newest. empty: nothing yet. note: worth knowing. no-line: what waits on this device. */
export type NoticeKind = 'wrong' | 'stale' | 'empty' | 'note' | 'no-line';

interface NoticeProps {
	kind: NoticeKind;
	/** What happened, a sentence. */
	title: string;
	/** What was kept and what to do. */
	children?: ReactNode;
	/** The one act that helps. */
	act?: ReactNode;
}

const edges: Record<NoticeKind, string> = {
	wrong: 'border-l-[7px] border-l-ink',
	stale: 'border-l-[7px] border-l-ink [border-left-style:dashed]',
	empty: '',
	note: '',
	'no-line': 'border-[1.5px] border-dashed border-second',
};

/** The states of a page or a part of it, in words: what happened, what was kept, what to do. `wrong` is announced at once. */
export function Notice({ kind, title, children, act }: NoticeProps) {
	return (
		<section
			role={kind === 'wrong' ? 'alert' : kind === 'stale' || kind === 'no-line' ? 'status' : undefined}
			className={`sheet px-4.5 py-4 ${edges[kind]}`}
		>
			<h2 className="m-0 text-h2 leading-snug font-strong">{title}</h2>
			{children && <div className="mt-1 max-w-[75ch] text-second">{children}</div>}
			{act && <div className="mt-3 flex flex-wrap gap-2.5">{act}</div>}
		</section>
	);
}

interface LoadingLinesProps {
	/** What is awaited, for a screen reader: "The surveys". */
	what: string;
	/** As many rows as are likely, so that nothing jumps. */
	rows?: number;
	rowHeightPx?: number;
}

/** Stands for rows that are on their way, at their height. Show it below the page's true heads. */
export function LoadingLines({ what, rows = 5, rowHeightPx = 44 }: LoadingLinesProps) {
	return (
		<div role="status" aria-label={`${what}: loading`}>
			{Array.from({ length: rows }, (_, row) => `row ${row}`).map((key) => (
				<div key={key} className="flex items-center border-b border-hair px-2" style={{ height: rowHeightPx }}>
					<span className="h-2.5 w-2/5 rounded-corner bg-hair motion-safe:animate-pulse" />
				</div>
			))}
		</div>
	);
}
