/**
 * Points that say which frame they stand in, so that the compiler refuses to mix two.
 *
 * All are metres, X/Y plan, Z up, double precision.
 * survey: one standing of the instrument. design: the model's engineering coordinates. map: easting, northing, orthogonal height.
 */
declare const frame: unique symbol;

export type Vector3 = readonly [number, number, number];
export type Matrix3 = readonly [Vector3, Vector3, Vector3];

export type SurveyPoint = Vector3 & { readonly [frame]?: 'survey' };
export type DesignPoint = Vector3 & { readonly [frame]?: 'design' };
export type MapPoint = Vector3 & { readonly [frame]?: 'map' };
