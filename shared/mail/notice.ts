/** What is told to a person by mail: that something waits, or that something they acted on has changed. */

/**
 * When a notice leaves. `now`: at once, never taken back, never switched off (a life may hang on it: Hold, release). `soon`: after the three
 * minutes in which the act can be taken back, in a mail of its own. `digest`: with the rest, when the site's next working day begins.
 */
export type NoticeUrgency = 'now' | 'soon' | 'digest';

/** A closed list: each kind of notice and when it leaves. Hold points leave at once, the rest together (common practice). */
export const noticeUrgencies = {
	hold: 'now',
	'hold-lifted': 'now',
	'hold-point-released': 'now',
	'hold-point-refused': 'now',
	'hold-point-called': 'soon',
	'hold-point-submitted': 'soon',
	'hold-point-asked-more': 'soon',
	'witness-notice': 'soon',
	'check-published': 'soon',
	'check-withdrawn': 'soon',
	'flag-answered': 'digest',
	'flag-decided': 'digest',
	'flag-time-wished': 'digest',
	'flag-time-granted': 'digest',
	'flag-put-right': 'digest',
	'flag-reopened': 'soon',
	'flag-comment': 'digest',
	'condition-set': 'soon',
	'condition-met': 'digest',
	'fit-to-check': 'digest',
	'sheet-issued': 'digest',
	'sameness-proposed': 'digest',
} as const satisfies Record<string, NoticeUrgency>;

export type NoticeKind = keyof typeof noticeUrgencies;
export const noticeKinds = Object.keys(noticeUrgencies) as NoticeKind[];

/** A deviation as a mail shows it: millimetres; a side without limit is null. */
export interface NoticeRod {
	limitsMm: readonly [number | null, number | null];
	deviationMm: number;
	expandedUncertaintyMm: number | null;
	verdict: 'within' | 'outside' | 'too-close-to-call' | 'undecided';
}

/** For so long an act whose notices wait can be taken back. */
export const takeBackMs = 3 * 60_000;
