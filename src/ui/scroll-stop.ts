/**
 * For what scrolls by itself: a stop of the keyboard while there is something to scroll to, so that arrows reach it (WCAG 2.1.1); none where all
 * is seen. Used as a ref: `<div ref={scrollStop} className="overflow-x-auto">`.
 */
export function scrollStop(box: HTMLElement | null): (() => void) | undefined {
	if (box === null) return undefined;
	const look = () => {
		const isScrolling = box.scrollWidth > box.clientWidth || box.scrollHeight > box.clientHeight;
		if (isScrolling) box.tabIndex = 0;
		else box.removeAttribute('tabindex');
	};
	look();
	if (typeof ResizeObserver === 'undefined') return undefined;
	const observer = new ResizeObserver(look);
	observer.observe(box);
	for (const child of box.children) observer.observe(child);
	return () => observer.disconnect();
}
