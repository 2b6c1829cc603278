import { describe, expect, it } from 'vitest'
import { complaintAbout } from '#server/services/passwords'

const ownWords = ['Invented Clinics', 'North Site', 'Brno', 'Ada Example', 'ada.example@clinic.example']
const LONG = /at least 15/
const SHORT = /at least 8/
const COMMON = /commonest/
const FEW = /same few/
const OWN = /Leave out/

describe('a new password', () => {
  it.each([
    ['14 characters alone', 'correct horses', false, LONG],
    ['15 characters alone', 'correct horses!', false, null],
    ['7 characters beside a second factor', 'c0rrect', true, SHORT],
    ['8 characters beside a second factor', 'kuh7Wald', true, null],
    ['15 code points outside the basic plane', '🐢🐬🦊🐺🐻🐼🐨🐯🦁🐮🐷🐸🐵🐔🐧', false, null],
    ['14 code points that are 28 units', '🐢🐬🦊🐺🐻🐼🐨🐯🦁🐮🐷🐸🐵🐔', false, LONG],
    ['letters with marks count once, composed or not', 'o\u0308o\u0308ber die Br', true, null],
    ['no capitals, digits or signs asked for', 'quiet rivers bend slowly', false, null],
    ['64 characters and more', 'a long road through the hills and down to the sea, then along the shore', false, null],
    ['257 characters', 'ab cd efgh '.repeat(24), false, /at most 256/],
    ['one of the commonest', 'password1', true, COMMON],
    ['one of the commonest in capitals', 'PassWord1', true, COMMON],
    ['a common one twice', 'passwordpassword', false, COMMON],
    ['a common one three times', 'qwertyqwertyqwerty', false, COMMON],
    ['one character', 'aaaaaaaaaaaaaaaa', false, FEW],
    ['the product and a year', 'Orthodrome 2026', false, OWN],
    ['the product beside enough else', 'orthodrome likes blue teapots', false, null],
    ['the organisation', 'InventedClinics1', false, OWN],
    ['the own name', 'Ada Example 1974', false, OWN],
    ['the e-mail address', 'ada.example@clinic.example', false, OWN],
  ])('%s', (_name, password, secondFactor, complaint) => {
    const said = complaintAbout(password, { secondFactor, ownWords })
    if (complaint) expect(said).toMatch(complaint)
    else expect(said).toBeNull()
  })
})
