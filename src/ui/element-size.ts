import { type RefObject, useLayoutEffect, useState } from 'react';

/** An element's inner size in whole CSS pixels, followed from the first picture on. A hidden element keeps the size it had. */
export function useElementSize(
	element: RefObject<Element | null>,
	initial: { widthPx: number; heightPx: number },
): { widthPx: number; heightPx: number } {
	const [size, setSize] = useState(initial);
	useLayoutEffect(() => {
		const measured = element.current;
		if (measured === null) return;
		const take = (): void => {
			const { width, height } = measured.getBoundingClientRect();
			if (width < 1 || height < 1) return;
			setSize((before) =>
				before.widthPx === Math.floor(width) && before.heightPx === Math.floor(height)
					? before
					: { widthPx: Math.floor(width), heightPx: Math.floor(height) },
			);
		};
		take();
		if (typeof ResizeObserver === 'undefined') return;
		const observer = new ResizeObserver(take);
		observer.observe(measured);
		return () => observer.disconnect();
	}, [element]);
	return size;
}
