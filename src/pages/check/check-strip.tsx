import { Link } from 'react-router-dom';
import type { CheckHead } from '#shared/check/contract.ts';
import { sheetWords } from '#src/features/check/sheet-words.ts';
import { calendarDay, counted } from '#src/lib/format.ts';
import { useAddressId } from '#src/lib/session.ts';
import { useIsBelow } from '#src/ui/screen-width.ts';
import { Strip } from '#src/ui/strip.tsx';

const stateWords: Record<CheckHead['state'], string | null> = {
	computing: null,
	trial: 'trial, not published',
	published: 'published',
	withdrawn: 'withdrawn',
	failed: 'no result',
};

/** Who stands behind the fits, each name once: "fits by Jo Marsh, checked by T. Okoro". */
function fitWords({ fits, isSecondPersonAsked }: Pick<CheckHead, 'fits' | 'isSecondPersonAsked'>): string {
	const word = fits.length === 1 ? 'fit' : `${fits.length} fits`;
	const makers = [...new Set(fits.map((fit) => fit.adoptedBy))].join(' and ');
	const checkers = [...new Set(fits.flatMap((fit) => (fit.checkedBy === null ? [] : [fit.checkedBy])))].join(' and ');
	const unchecked = uncheckedCount({ fits, isSecondPersonAsked });
	if (checkers === '') return `${word} by ${makers}${unchecked > 0 ? ', unchecked' : ''}`;
	return `${word} by ${makers}, checked by ${checkers}${unchecked > 0 ? `, ${unchecked} unchecked` : ''}`;
}

/** Fits that a second person should have checked and has not; none where the site asks for nobody. */
function uncheckedCount({ fits, isSecondPersonAsked }: Pick<CheckHead, 'fits' | 'isSecondPersonAsked'>): number {
	return isSecondPersonAsked ? fits.filter((fit) => fit.checkedBy === null).length : 0;
}

/** What the check rests on, and whether that is the newest. Each leads to the thing itself. */
export function CheckStrip({ check }: { check: CheckHead }) {
	const siteId = useAddressId('siteId');
	const { revision, survey, fits, sheet } = check;
	const isFitOld = fits.some((fit) => !fit.isNewest);
	const quiet = 'text-second no-underline hover:underline hover:underline-offset-3';
	const state = stateWords[check.state];
	const isPhone = useIsBelow('tablet');
	const uncheckedFits = uncheckedCount(check);
	const stateItem = state !== null && <b key="state">{state}</b>;
	if (isPhone) {
		return (
			<Strip
				items={[
					stateItem,
					<Link key="revision" to={`/sites/${siteId}/model`} className={quiet}>
						rev {revision.number}
						{revision.isNewest ? ', newest' : <b>, not the newest</b>}
					</Link>,
					<Link key="survey" to={`/sites/${siteId}/surveys/${survey.surveyId}`} className={quiet}>
						survey {survey.number}
					</Link>,
					isFitOld ? <b key="fits">a newer fit is adopted</b> : uncheckedFits > 0 && `${counted(uncheckedFits, 'fit')} unchecked`,
					<Link key="sheet" to={`/sites/${siteId}/sheets/${sheet.sheetId}`} className={quiet}>
						{sheetWords(sheet.name)}
						{!sheet.isNewest && <b>, superseded</b>}
					</Link>,
				]}
			/>
		);
	}
	return (
		<Strip
			items={[
				<Link key="revision" to={`/sites/${siteId}/model`} className={quiet}>
					rev {revision.number}
					{revision.isNewest ? ', newest' : <b>, not the newest</b>}
				</Link>,
				<Link key="survey" to={`/sites/${siteId}/surveys/${survey.surveyId}`} className={quiet}>
					survey {survey.number}, {calendarDay(survey.surveyedOn, check.madeAt)}, {counted(survey.setupCount, 'set-up')}
				</Link>,
				fits.length > 0 && (
					<span key="fits">
						{fitWords(check)}
						{isFitOld && <b>, a newer one is adopted</b>}
					</span>
				),
				<Link key="sheet" to={`/sites/${siteId}/sheets/${sheet.sheetId}`} className={quiet}>
					{sheetWords(sheet.name)}, {sheet.decision}
					{!sheet.isNewest && <b>, superseded</b>}
				</Link>,
				stateItem,
			]}
		/>
	);
}
