/** What was sent is not imported; its message is the sentence for whoever sent it. */
export class ImportRefused extends Error {}
