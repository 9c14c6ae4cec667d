/** What a measurement hands back: units of work done, and the number that proves it. */
export interface Done {
	n: number;
	check: number;
}

/** One of the two programs of a workload. Called once in a fresh process; everything it does is measured, what `prepare` did is not. */
export type Program = (units: number) => Done;

export interface Workload {
	/** As named on the command line. */
	name: string;
	/** What n counts. */
	unit: string;
	units: number;
	/** The median quotient, product by yardstick, a unit each, that is to be met. */
	goal: number;
	/** What the check of the product must be, and how near. */
	expected: { value: number; within: number };
	/**
	 * Makes the input and gives the program that is measured.
	 * @param times 1, or 3 for the same at three times the size
	 */
	product: (times: number) => Program;
	yardstick: (times: number) => Program;
}
