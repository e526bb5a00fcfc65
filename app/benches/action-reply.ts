/**
 * What every action on a bench answers: with 200 the bridge's own sentence; with 400 what is wrong beside which field;
 * with 403, 409 or 503 why it was not done, in sentences. A code is the bridge's refusal code or one of `ownCodes`.
 */
export type ActionReply =
  | { ok: true; answer: string }
  | {
      ok: false
      errors: Record<string, string[]>
      refusals: { code: string; sentence: string }[]
    }

/** Refusals of the app's own, besides those of the bridge. */
export const ownCodes = {
  notPermitted: 'not-permitted',
  bridgeSilent: 'bridge-silent',
  struck: 'struck',
  noBench: 'no-bench',
  noInstruments: 'no-instruments',
  hasInstruments: 'has-instruments',
  cautionsOpen: 'cautions-open',
  checklistOpen: 'checklist-open',
  tooManyPhotos: 'too-many-photos',
} as const

export const done = (answer: string): ActionReply => ({ ok: true, answer })

export const fieldErrors = (errors: Record<string, string[]>): ActionReply => ({
  ok: false,
  errors,
  refusals: [],
})

export const refused = (...refusals: { code: string; sentence: string }[]): ActionReply => ({
  ok: false,
  errors: {},
  refusals,
})

/** To whatever would need an instrument, on a bench without ports. */
export const noInstruments = refused({
  code: ownCodes.noInstruments,
  sentence:
    'This bench has no instruments that this software reaches: nothing can be commanded or measured from here. Switch it on and off at its supplies, and type what its meters show.',
})

/** A reply with the HTTP status that it goes out with. */
export type Answered = { status: 200 | 400 | 403 | 409 | 503; reply: ActionReply }
