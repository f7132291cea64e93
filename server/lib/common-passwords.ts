/** Roots of the passwords that are tried first. A password that is only roots, digits and signs is refused. */
const roots =
  `password passwort passw0rd motdepasse contrasena qwerty qwertz azerty asdfgh asdf zxcvbn zxcvb yxcvbn
  iloveyou loveyou letmein welcome willkommen monkey dragon football baseball basketball superman batman starwars
  princess sunshine shadow master michael jennifer jordan hunter killer trustno whatever freedom computer internet
  administrator admin root user login access secret changeme default guest test demo temp hello qazwsx pokemon
  charlie thomas daniel jessica ashley summer winter spring autumn sommer herbst january february march april june
  july august september october november december monday friday sunday london berlin paris google system server
  database network engineer sensor spandrel`
    .split(/\s+/)
    .sort((a, b) => b.length - a.length)

const rows = [
  '01234567890123456789',
  'qwertyuiop',
  'qwertzuiop',
  'azertyuiop',
  'asdfghjkl',
  'zxcvbnm',
  'yxcvbnm',
]
const runs = [...rows, 'abcdefghijklmnopqrstuvwxyz'].flatMap((row) => [row, [...row].reverse().join('')])

const letters: Record<string, string> = {
  '0': 'o',
  '1': 'i',
  '3': 'e',
  '4': 'a',
  '5': 's',
  '7': 't',
  '@': 'a',
  $: 's',
}

const plain = (text: string): string =>
  text
    .toLowerCase()
    .normalize('NFKD')
    .replace(/[^a-z0-9]/g, '')

/** Removes runs along the alphabet or a keyboard row, four characters or longer. */
function withoutRuns(text: string): string {
  let rest = ''
  for (let at = 0; at < text.length;) {
    let length = 4
    const isRun = (size: number): boolean =>
      at + size <= text.length && runs.some((run) => run.includes(text.slice(at, at + size)))
    if (!isRun(length)) {
      rest += text[at]
      at += 1
      continue
    }
    while (isRun(length + 1)) length += 1
    at += length
  }
  return rest
}

function withoutWords(text: string, words: string[]): string {
  return words.reduce((rest, word) => rest.replaceAll(word, ''), text)
}

/** What is left when all that can be guessed is taken away still needs guessing. */
function isHardToGuess(password: string, words: string[]): boolean {
  const rest = withoutRuns(withoutWords(password, words))
  const ownLetters = rest.replace(/[^\p{L}]/gu, '').length
  return ownLetters >= 4 || (rest.length >= 8 && new Set(rest).size >= 6)
}

/**
 * True where a password is made of common words, words of the account, keyboard runs, repeated characters, digits and
 * signs only, so that little of its own remains.
 */
export function isCommonPassword(password: string, personal: string[]): boolean {
  if (new Set(password.toLowerCase()).size < 5) return true
  const own = personal
    .flatMap((text) => [plain(text), ...text.toLowerCase().split(/[^\p{L}\p{N}]+/u)])
    .filter((word) => word.length >= 4)
    .sort((a, b) => b.length - a.length)
  const words = [...own, ...roots]
  const readings = [password.toLowerCase(), [...password.toLowerCase()].map((c) => letters[c] ?? c).join('')]
  return readings.some((reading) => !isHardToGuess(reading, words))
}
