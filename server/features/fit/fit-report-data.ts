import { and, asc, desc, eq, isNull } from 'drizzle-orm';
import type { FitDetail } from '#shared/fit/contract.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import type { MapConversion } from '#shared/model/model-schema.ts';
import type { SetupObservation, SurveyObservation } from '#shared/survey/observation-record.ts';
import type { Handle } from '../../db/database.ts';
import { users } from '../../db/schema/account.ts';
import { controlPoints, controlSets } from '../../db/schema/control.ts';
import { revisions } from '../../db/schema/model.ts';
import { sites } from '../../db/schema/site.ts';
import { setups, surveyPoints, surveys } from '../../db/schema/survey.ts';
import { foundOne } from '../../platform/refuse.ts';
import { fitOf } from './queries.ts';

/** All that a fit report tells, as it is stored. Metres and millimetres as named. */
export interface FitReportData {
	fit: FitDetail;
	siteName: string;
	isInvented: boolean;
	timeZone: string;
	printedAt: Date;
	survey: {
		number: number;
		name: string;
		stage: string;
		surveyedOn: string;
		observer: string;
		instrument: string;
		serial: string;
		fileName: string;
		fileSha256: string;
		storedBy: string;
		observation: SurveyObservation | null;
	};
	setup: {
		levelling: 'levelled' | 'free';
		bringsScale: boolean;
		pointSigmaM: { plan: number; height: number } | null;
		commonMm: number;
		instrumentHeightM: number | null;
		observation: SetupObservation | null;
	};
	control: {
		number: number;
		name: string;
		frame: 'design' | 'map';
		fileName: string;
		fileSha256: string;
		points: readonly ReportControlPoint[];
	};
	mapConversion: MapConversion | null;
	grid: readonly { tag: string; points: readonly (readonly [number, number])[] }[];
	/** What else the set-up measured, survey frame: the places that rest on the fit. At most `mostPlaces`. */
	measured: readonly { name: string; surveyM: Vector3 }[];
	measuredCount: number;
}

export interface ReportControlPoint {
	name: string;
	code: string;
	designM: readonly [number | null, number | null, number | null];
	sigmaPlanM: number | null;
	sigmaHeightM: number | null;
	state: 'in-use' | 'disturbed' | 'lost';
	howSet: string | null;
	setBy: string | null;
	verifiedAt: Date | null;
}

/** The report looks at so many places at most: a set-up of a scanner has millions, and their uncertainty is smooth. */
const mostPlaces = 20_000;

/** Reads what the report of a fit of the site needs; NOT_FOUND for another site's. */
export async function fitReportData(db: Handle, siteId: string, fitId: string, printedAt: Date): Promise<FitReportData> {
	const fit = await fitOf(db, siteId, fitId);
	const site = foundOne(await db.select().from(sites).where(eq(sites.id, siteId)));
	const { setup, survey, storedBy } = foundOne(
		await db
			.select({ setup: setups, survey: surveys, storedBy: users.name })
			.from(setups)
			.innerJoin(surveys, eq(surveys.id, setups.surveyId))
			.innerJoin(users, eq(users.id, surveys.storedBy))
			.where(and(eq(setups.siteId, siteId), eq(setups.id, fit.setupId))),
	);
	const control = foundOne(await db.select().from(controlSets).where(eq(controlSets.id, fit.controlSetId)));
	const points = await db
		.select()
		.from(controlPoints)
		.where(eq(controlPoints.controlSetId, fit.controlSetId))
		.orderBy(asc(controlPoints.name));
	const [revision] = await db
		.select({ reading: revisions.reading })
		.from(revisions)
		.where(and(eq(revisions.siteId, siteId), eq(revisions.state, 'ready')))
		.orderBy(desc(revisions.uploadedAt))
		.limit(1);
	const measured = await db
		.select({ name: surveyPoints.name, x: surveyPoints.xM, y: surveyPoints.yM, z: surveyPoints.zM })
		.from(surveyPoints)
		.where(and(eq(surveyPoints.setupId, fit.setupId), isNull(surveyPoints.voidedReason)))
		.orderBy(asc(surveyPoints.row))
		.limit(mostPlaces);
	const targets = new Set([...fit.pairs.pairs.map(({ name }) => name), ...fit.relabellings.map(({ target }) => target)]);
	const places = measured.filter(({ name }) => !targets.has(name.trim()));
	const { pointSigmaPlanM: plan, pointSigmaHeightM: height } = setup;
	return {
		fit,
		siteName: site.name,
		isInvented: site.isInvented,
		timeZone: site.timeZone,
		printedAt,
		survey: { ...survey, storedBy },
		setup: { ...setup, pointSigmaM: plan === null || height === null ? null : { plan, height } },
		control: {
			...control,
			points: points.map(({ designXM, designYM, designZM, ...point }) => ({ ...point, designM: [designXM, designYM, designZM] as const })),
		},
		mapConversion: revision?.reading?.mapConversion ?? null,
		grid: revision?.reading?.grid ?? [],
		measured: places.map(({ name, x, y, z }) => ({ name, surveyM: [x, y, z] as const })),
		measuredCount: places.length,
	};
}
