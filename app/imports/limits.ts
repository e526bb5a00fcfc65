/** What a file of readings may have. A class's readings of a term are a few hundred rows. */
export const largestCsvBytes = 256_000
export const largestRows = 500
export const largestColumns = 40
/** As much is kept of the name of a file. */
export const longestName = 120
/** Said by the page before a file is sent, and by the server in any case. */
export const tooManyBytes = (bytes: number) =>
  `This file has ${Math.ceil(bytes / 1000)} thousand bytes. A file of readings may have ${largestCsvBytes / 1000} thousand: leave out what is not needed, or send it in parts.`
/** The file goes along with each step, in base64. */
export const largestImportBody = 1_000_000
