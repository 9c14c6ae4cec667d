import type { LengthUnit } from './point-table-schema.ts';

/**
 * A length in metres. The international foot is 0.3048 m exactly (1959); the US survey foot 1200/3937 m exactly (Mendenhall Order 1893).
 * Multiplied and divided by whole numbers, so that each is rounded as few times as can be.
 */
export function toMetres(value: number, unit: LengthUnit): number {
	switch (unit) {
		case 'm':
			return value;
		case 'mm':
			return value / 1000;
		case 'ft':
			return (value * 3048) / 10_000;
		case 'ftUS':
			return (value * 1200) / 3937;
	}
}
