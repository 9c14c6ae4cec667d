import { LoadingLines } from '#src/ui/notice.tsx';

/** The frame of a page whose code or figures are on their way: heads at their places, so that nothing jumps. */
export function LoadingPage({ isInFrame = false }: { isInFrame?: boolean }) {
	return (
		<>
			{!isInFrame && <div className="h-14 tablet:h-13" />}
			<div className={isInFrame ? '' : 'px-4 py-1.5 tablet:px-6'}>
				<div className="mb-2 h-5 w-1/3 rounded-corner bg-hair" />
				<div className="mb-3 h-9 w-2/3 rounded-corner bg-hair" />
				<LoadingLines what="The page" />
			</div>
		</>
	);
}
