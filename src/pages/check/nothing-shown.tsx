import { count } from '#src/lib/format.ts';
import { Button } from '#src/ui/button.tsx';
import { Notice } from '#src/ui/notice.tsx';
import type { CheckView } from './use-check-view.ts';

/** The filters leave nothing: which, and the press that undoes it. */
export function NothingShown({ view }: { view: CheckView }) {
	const hasOtherFilter = view.pourId !== null || view.storey !== null || view.find !== '';
	return (
		<Notice
			kind="empty"
			title={view.passing.length === 0 ? 'Nothing here goes by that name.' : 'Nothing of what the chips show is here.'}
			act={
				<Button
					onClick={() => {
						view.setPourId(null);
						view.setStorey(null);
						view.setFind(null);
					}}
					whyNot={hasOtherFilter ? null : 'Press a chip above to show more.'}
				>
					Show the whole check
				</Button>
			}
		>
			{view.passing.length > 0 && `${count(view.passing.length)} deviations pass the other filters. Press a chip to show them.`}
		</Notice>
	);
}
