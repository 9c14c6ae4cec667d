/** Told apart in what a check rests on: raise it with every change that can change a number, a match or a verdict. */
export const engineVersion = '2';
