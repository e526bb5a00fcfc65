/**
 * A formula is bounded before it is parsed, and again as a tree. It has neither loops nor definitions, so that working it
 * out is one visit to each part, with a fixed number of operations: no time limit is needed.
 */
export const longestFormula = 400
/** Brackets within brackets. */
export const deepestBrackets = 20
export const deepestTree = 60
export const mostParts = 200
export const longestSymbol = 12
/** Of a quantity with a unit; in a relation for e/m none comes near. */
export const largestPower = 12
