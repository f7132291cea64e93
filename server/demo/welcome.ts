import { demoAccounts, demoPassword } from './accounts.ts'

/** What stands on the terminal when the server is up. */
export function welcome(address: string, isDemo: boolean): string {
  const lines = ['', `  Spandrel is ready: ${address}`, '']
  if (isDemo) {
    const width = Math.max(...demoAccounts.map(({ email }) => email.length))
    lines.push(
      '  Demonstration: all people, places and organisations in it are invented.',
      ...demoAccounts.map(({ email, says }) => `    ${email.padEnd(width)}  ${says}`),
      `    password of each: ${demoPassword}`,
      '',
    )
  }
  return `${lines.join('\n')}\n`
}
