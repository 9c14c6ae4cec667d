import { type RefObject, useLayoutEffect, useState } from 'react';

/** The width of an element in whole CSS pixels, known before the first picture and followed from then on. */
export function useElementWidth(element: RefObject<Element | null>, initialPx: number): number {
	const [widthPx, setWidthPx] = useState(initialPx);
	useLayoutEffect(() => {
		const measured = element.current;
		if (!measured) return;
		const take = () => {
			const width = Math.floor(measured.getBoundingClientRect().width);
			if (width > 0) setWidthPx(width);
		};
		take();
		if (typeof ResizeObserver === 'undefined') return;
		const observer = new ResizeObserver(take);
		observer.observe(measured);
		return () => observer.disconnect();
	}, [element]);
	return widthPx;
}
