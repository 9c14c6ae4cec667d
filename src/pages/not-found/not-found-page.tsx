import { ButtonLink } from '#src/ui/button.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';

/** An address that leads nowhere. */
export default function NotFoundPage() {
	return (
		<div className="p-4 tablet:p-6">
			<Headline>There is no such page</Headline>
			<Notice
				kind="empty"
				title="This address leads nowhere."
				act={
					<ButtonLink to="/sites" weight="act">
						To your sites
					</ButtonLink>
				}
			>
				It may be mistyped, or the page has moved.
			</Notice>
		</div>
	);
}
