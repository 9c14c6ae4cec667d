/**
 * @param n units of work done
 * @param check a number that proves the work was done; found after the clock has stopped
 * @param also further figures worth printing
 */
export interface Done {
	n: number;
	check: () => number;
	also?: () => Record<string, number>;
}

/** One of the two programs of a workload, called once in a fresh process: all that it does is measured, warming up included. */
export type Program = (units: number) => Done;

/** Makes the input, which is not measured; `times` 3 makes it three times the size. */
export type Prepare = (times: number) => Program;

export interface Workload {
	/** As named on the command line. */
	name: string;
	/** What n counts. */
	unit: string;
	units: { product: number; yardstick: number };
	/** The median quotient, seconds a unit of the product over seconds a unit of the yardstick, that is to be met. */
	goal: number;
	/** How often the work of one unit grows when the input is three times the size: cost over this may not rise. */
	growth: number;
	/** What the check of the product must be at full size, and how near. */
	expected: { value: number; within: number };
	product: Prepare;
	yardstick: Prepare;
}
