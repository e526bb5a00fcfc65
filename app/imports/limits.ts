/** What a file of readings may have. A class's readings of a term are a few hundred rows. */
export const largestCsvBytes = 256_000
export const largestRows = 500
export const largestColumns = 40
/** As much is kept of the name of a file. */
export const longestName = 120
/** The file goes along with each step, in base64. */
export const largestImportBody = 1_000_000
