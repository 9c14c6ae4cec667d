import { Head } from './head.tsx';
import { PageFrame } from './page-frame.tsx';

/** Round pages that belong to no site. */
export function ListLayout() {
	return <PageFrame head={<Head memberRole="" />} />;
}
