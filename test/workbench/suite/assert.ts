/** The few assertions that the suites use, for the worker in the browser, which has no `node:assert`. */
export function ok(value: unknown, message = 'not as claimed'): asserts value {
  if (!value) throw new Error(message)
}

export function strictEqual(actual: unknown, expected: unknown, message = ''): void {
  if (!Object.is(actual, expected))
    throw new Error(`${message} ${JSON.stringify(actual)} is not ${JSON.stringify(expected)}`)
}

export function notStrictEqual(actual: unknown, expected: unknown, message = ''): void {
  if (Object.is(actual, expected)) throw new Error(`${message} both are ${JSON.stringify(actual)}`)
}

export function deepStrictEqual(actual: unknown, expected: unknown, message = ''): void {
  strictEqual(JSON.stringify(actual), JSON.stringify(expected), message)
}

export function match(actual: string, expected: RegExp, message = ''): void {
  if (!expected.test(actual))
    throw new Error(`${message} ${JSON.stringify(actual.slice(0, 2000))} does not match ${expected}`)
}

export async function rejects(run: () => Promise<unknown>, expected: RegExp): Promise<void> {
  const reason = await run().then(
    () => fail(`nothing is refused, not even ${expected}`),
    (error: unknown) => String(error),
  )
  match(reason, expected)
}

export function fail(message: string): never {
  throw new Error(message)
}
