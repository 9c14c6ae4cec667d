import { type ReactNode, Suspense } from 'react';
import { Outlet, useLocation, useNavigation } from 'react-router-dom';
import { useReading } from '#src/lib/reading.ts';
import { usePreferences } from '#src/lib/use-preferences.ts';
import { KeysProvider } from '#src/ui/keys.tsx';
import { LoadingPage } from './loading-page.tsx';

/** What every signed-in page stands in: the way past the head, the head, the page itself with its own waiting. */
export function PageFrame({ head }: { head: ReactNode }) {
	const { pathname } = useLocation();
	usePreferences();
	const { decimalMark, dateLanguage } = useReading();
	const isLeaving = useNavigation().state !== 'idle';
	return (
		<KeysProvider>
			<a
				href="#page"
				className="absolute top-2 left-2 z-30 -translate-y-20 rounded-corner bg-ink px-4 py-2 text-ground no-underline focus:translate-y-0"
			>
				To the page
			</a>
			{head}
			<main
				id="page"
				tabIndex={-1}
				aria-busy={isLeaving}
				className="mx-auto w-full max-w-[1920px] px-4 pt-1.5 pb-28 outline-none tablet:px-6 tablet:pb-10"
			>
				{/* A new address shows its own heads at once instead of the old page's figures. */}
				<Suspense key={`${pathname} ${decimalMark} ${dateLanguage}`} fallback={<LoadingPage isInFrame />}>
					<Outlet />
				</Suspense>
			</main>
		</KeysProvider>
	);
}
