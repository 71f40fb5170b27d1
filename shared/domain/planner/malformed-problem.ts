/** A problem that contradicts itself: a fault of the program that asked, not of a person. */
export class MalformedProblem extends Error {}
