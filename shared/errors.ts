/**
 * Every error code with when it happens and what the person can do. `screen` is for people; the log has a text of its own.
 * The body of an error answer is `ApiErrorBody`.
 */
export const errors = {
  'not-signed-in': { status: 401, screen: 'You are signed out. Sign in again; what you typed is kept on this page.' },
  // One text for every cause: unknown address, wrong password, wrong or missing code, deactivated account.
  'sign-in-failed': { status: 401, screen: 'The e-mail address, the password or the code is not right.' },
  'link-used': { status: 410, screen: 'This link was used before or is too old. Ask the administrator for a new one.' },
  'not-allowed': { status: 403, screen: 'Your role at this site does not allow this. An administrator can change roles under People.' },
  'second-factor-needed': { status: 403, screen: 'Set up the second factor first: your role signs or approves. Go to Profile.' },
  'other-origin': { status: 403, screen: 'The request came from another site and was refused.' },
  'not-found': { status: 404, screen: 'Nothing was found at this address, or you hold no role at its site.' },
  'not-valid': { status: 422, screen: 'Some entries need a second look. Nothing was lost.' },
  'changed-meanwhile': { status: 409, screen: 'Someone changed this while you were working. Both values are shown; choose one.' },
  'wrong-state': { status: 409, screen: 'This step is not possible in the present state. Reload to see what happened meanwhile.' },
  'already-signed': { status: 409, screen: 'This report was signed a moment ago by someone else. Your text is kept as a draft.' },
  'not-ready': { status: 409, screen: 'The report cannot be signed yet. The list says what is missing.' },
  'wrong-password': { status: 422, screen: 'The password is not right. Nothing was signed.' },
  'altered': { status: 409, screen: 'This signed version no longer fits its hash: it was altered outside the program. It is neither shown nor sent. Tell the administrator; a backup holds the original.' },
  'double-booking': { status: 409, screen: 'The room or the technologist is taken at that time. Choose another time.' },
  'too-large': { status: 413, screen: 'The file is larger than 10 MB. Nothing was stored.' },
  'wrong-file-type': { status: 415, screen: 'The file is not a PDF, PNG or JPEG, whatever its name says. Nothing was stored.' },
  'too-many-requests': { status: 429, screen: 'Too many attempts. Wait a minute and try again.' },
  'no-space': { status: 507, screen: 'The server has no room to store this. What you typed is kept on this page; tell the administrator.' },
  'unexpected': { status: 500, screen: 'Something went wrong on the server. Nothing was stored; try again, and tell the administrator if it happens twice.' },
} as const satisfies Record<string, { status: number, screen: string }>

export type ErrorCode = keyof typeof errors

/** One complaint about one field, in words for people; `path` is the field's name ("runs[0].side"). */
export interface FieldError { path: string, message: string }

export interface ApiErrorBody { code: ErrorCode, message: string, fields?: FieldError[], details?: unknown }

/** Thrown by services; the wrapper turns it into an answer. `log` never holds patient data. */
export class DomainError extends Error {
  constructor(readonly code: ErrorCode, readonly options: { message?: string, fields?: FieldError[], details?: unknown, log?: string } = {}) {
    super(options.log ?? code)
    this.name = 'DomainError'
  }

  get body(): ApiErrorBody {
    return { code: this.code, message: this.options.message ?? errors[this.code].screen, fields: this.options.fields, details: this.options.details }
  }
}
