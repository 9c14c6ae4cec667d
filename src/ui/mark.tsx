/** The product's mark: two posts, a string between, and a plumb from its middle. */
export function Mark({ sizePx = 28 }: { sizePx?: number }) {
	return (
		<svg width={sizePx} height={(sizePx * 26) / 28} viewBox="0 0 28 26" aria-hidden="true" className="shrink-0">
			<path d="M4 24V8M24 24V8" className="stroke-current" strokeWidth={3} />
			<path d="M1 10.5L14 8L27 10.5" className="fill-none stroke-current" strokeWidth={4.5} />
			<path d="M1 10.5L14 8L27 10.5" className="fill-none stroke-string" strokeWidth={2} />
			<path d="M14 10v8" className="stroke-current" strokeWidth={1.5} />
			<path d="M11.800 17h4.400L14 24z" className="fill-current" />
		</svg>
	);
}
