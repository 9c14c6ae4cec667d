import type { ComponentType } from 'react';
import { createBrowserRouter, type LazyRouteFunction, Navigate, type RouteObject } from 'react-router-dom';
import type { Place } from '#src/features/site/site-line.tsx';
import { Gate } from './gate.tsx';
import { ListLayout } from './list-layout.tsx';
import { LoadingPage } from './loading-page.tsx';
import type { PageHandle } from './page-handle.ts';
import { RouteFault } from './route-fault.tsx';
import { SiteLayout } from './site-layout.tsx';

type PageModule = { default: ComponentType };

/** A page's code comes when its address is gone to. */
const page =
	(load: () => Promise<PageModule>): LazyRouteFunction<RouteObject> =>
	async () => ({ Component: (await load()).default });

/** A page of a site: where on the line it hangs, and what its way back is called on a phone. */
const sitePage = (path: string, place: Place, load: () => Promise<PageModule>, back?: PageHandle['back']): RouteObject => ({
	path,
	lazy: page(load),
	errorElement: <RouteFault />,
	handle: { place, ...(back && { back }) } satisfies PageHandle,
});

/** A page of a site that hangs from no place of the line. */
const besidePage = (path: string, load: () => Promise<PageModule>): RouteObject => ({
	path,
	lazy: page(load),
	errorElement: <RouteFault />,
	handle: { place: null, back: { path: '', word: 'Board' } } satisfies PageHandle,
});

/** All addresses of the program. A new page is a line here. */
export const routes: RouteObject[] = [
	{
		errorElement: <RouteFault isWhole />,
		hydrateFallbackElement: <LoadingPage />,
		children: [
			{ path: '/sign-in', lazy: page(() => import('#src/pages/sign-in/sign-in-page.tsx')) },
			{ path: '/invitation', lazy: page(() => import('#src/pages/invitation/invitation-page.tsx')) },
			{ path: '/reset', lazy: page(() => import('#src/pages/reset/reset-page.tsx')) },
			{ path: '/verify', lazy: page(() => import('#src/pages/verify/verify-page.tsx')) },
			{ path: '/mailbox', lazy: page(() => import('#src/pages/mailbox/mailbox-page.tsx')) },
			{
				element: <Gate />,
				children: [
					{ index: true, element: <Navigate to="/sites" replace /> },
					{
						element: <ListLayout />,
						children: [
							{ path: '/sites', lazy: page(() => import('#src/pages/sites/sites-page.tsx')), errorElement: <RouteFault /> },
							{ path: '/account', lazy: page(() => import('#src/pages/account/account-page.tsx')), errorElement: <RouteFault /> },
						],
					},
					{
						path: '/sites/:siteId',
						element: <SiteLayout />,
						errorElement: <RouteFault isWhole />,
						children: [
							{
								index: true,
								lazy: page(() => import('#src/pages/board/board-page.tsx')),
								errorElement: <RouteFault />,
								handle: { place: null } satisfies PageHandle,
							},
							sitePage('model', 'model', () => import('#src/pages/model/model-page.tsx')),
							sitePage('model/:revisionId', 'model', () => import('#src/pages/model/revision-page.tsx'), { path: 'model', word: 'Model' }),
							sitePage('control', 'control', () => import('#src/pages/control/control-page.tsx')),
							sitePage('surveys', 'surveys', () => import('#src/pages/surveys/surveys-page.tsx')),
							sitePage('surveys/:surveyId', 'surveys', () => import('#src/pages/survey/survey-page.tsx'), {
								path: 'surveys',
								word: 'Surveys',
							}),
							sitePage('surveys/:surveyId/setups/:setupId', 'surveys', () => import('#src/pages/fit/fit-page.tsx'), {
								path: 'surveys/:surveyId',
								word: 'Survey',
							}),
							sitePage('plan-survey', 'surveys', () => import('#src/pages/plan-survey/plan-survey-page.tsx'), {
								path: 'surveys',
								word: 'Surveys',
							}),
							sitePage('stability', 'control', () => import('#src/pages/stability/stability-page.tsx'), {
								path: 'control',
								word: 'Control',
							}),
							sitePage('check', 'check', () => import('#src/pages/checks/checks-page.tsx')),
							sitePage('checks/:checkId', 'check', () => import('#src/pages/check/check-page.tsx'), { path: 'check', word: 'Checks' }),
							sitePage('sheets', 'check', () => import('#src/pages/sheets/sheets-page.tsx'), { path: 'check', word: 'Checks' }),
							sitePage('sheets/:sheetId', 'check', () => import('#src/pages/sheet/sheet-page.tsx'), {
								path: 'sheets',
								word: 'Tolerance sheets',
							}),
							sitePage('flags', 'flags', () => import('#src/pages/flags/flags-page.tsx')),
							sitePage('flags/:flagId', 'flags', () => import('#src/pages/flag/flag-page.tsx'), { path: 'flags', word: 'Flags' }),
							sitePage('shoot-list', 'flags', () => import('#src/pages/shoot-list/shoot-list-page.tsx'), { path: 'flags', word: 'Flags' }),
							sitePage('pours', 'pours', () => import('#src/pages/pours/pours-page.tsx')),
							sitePage('pours/:pourId', 'pours', () => import('#src/pages/pour/pour-page.tsx'), { path: 'pours', word: 'Pours' }),
							sitePage('pours/:pourId/elements', 'pours', () => import('#src/pages/pour-elements/pour-elements-page.tsx'), {
								path: 'pours/:pourId',
								word: 'Pour',
							}),
							sitePage('records', 'records', () => import('#src/pages/records/records-page.tsx')),
							sitePage('records/:recordId', 'records', () => import('#src/pages/record/record-page.tsx'), {
								path: 'records',
								word: 'Records',
							}),
							besidePage('audit', () => import('#src/pages/audit/audit-page.tsx')),
							besidePage('settings', () => import('#src/pages/settings/settings-page.tsx')),
							besidePage('people', () => import('#src/pages/people/people-page.tsx')),
							{ path: '*', lazy: page(() => import('#src/pages/not-found/not-found-page.tsx')) },
						],
					},
				],
			},
			{ path: '*', lazy: page(() => import('#src/pages/not-found/not-found-page.tsx')) },
		],
	},
];

/** The router over the browser's address. */
export function createRouter() {
	return createBrowserRouter(routes);
}
