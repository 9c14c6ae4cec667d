/** The product's mark: two posts, a string between, and two plumbs. */
export function Mark({ sizePx = 28 }: { sizePx?: number }) {
	return (
		<svg width={sizePx} height={(sizePx * 26) / 28} viewBox="0 0 28 26" aria-hidden="true" className="shrink-0">
			<path d="M4 24V8M24 24V8" className="stroke-current" strokeWidth={3} />
			<path d="M1 10.5L14 8L27 10.5" className="fill-none stroke-current" strokeWidth={4.5} />
			<path d="M1 10.5L14 8L27 10.5" className="fill-none stroke-string" strokeWidth={2} />
			<path d="M10.200 10v6M17.800 10v6" className="stroke-current" strokeWidth={1.4} />
			<path d="M8.200 15.500h4L10.200 22zM15.800 15.500h4L17.800 22z" className="fill-current" />
		</svg>
	);
}
