import type * as z from 'zod'

type Issue = z.core.$ZodRawIssue

const kinds: Readonly<Record<string, string>> = {
  string: 'Give a text.',
  number: 'Give a number.',
  int: 'Give a whole number.',
  boolean: 'Give true or false.',
  object: 'Give an object.',
  array: 'Give a list.',
}
const forms: Readonly<Record<string, string>> = {
  uuid: 'Give an id such as 018f3c9a-0000-7000-8000-000000000000.',
  datetime: 'Write it as 2026-03-02T14:07:00+01:00, with the offset.',
  email: 'That is no e-mail address.',
}

/**
 * What is wrong with a field, as a sentence of ours that says what to give; given to zod in place of its own words. Where a
 * schema has a sentence of its own, that goes before.
 * @example issueWords({ code: 'invalid_type', expected: 'number', input: undefined }) // 'It is missing.'
 */
export function issueWords(issue: Issue): string | undefined {
  switch (issue.code) {
    case 'invalid_type':
      return issue.input === undefined ? 'It is missing.' : kinds[issue.expected]
    case 'too_small':
      return boundWords(issue.origin, issue.minimum, issue.inclusive ? 'or more' : 'over', 'At least')
    case 'too_big':
      return boundWords(issue.origin, issue.maximum, issue.inclusive ? 'or less' : 'under', 'At most')
    case 'invalid_format':
      return forms[issue.format] ?? 'It is not written as agreed.'
    case 'invalid_value':
      return oneOf(issue.values, issue.input)
    case 'invalid_union':
      return Array.isArray(issue.options)
        ? oneOf(issue.options, issue.input)
        : 'It has none of the forms that are taken.'
    default:
      return undefined
  }
}

function boundWords(origin: string, bound: unknown, side: string, count: string): string {
  if (origin === 'string') return `${count} ${String(bound)} characters.`
  if (origin === 'array') return `${count} ${String(bound)} entries.`
  return side.startsWith('or')
    ? `It must be ${String(bound)} ${side}.`
    : `It must be ${side} ${String(bound)}.`
}

function oneOf(values: readonly unknown[], input: unknown): string {
  if (input === undefined) return 'It is missing.'
  const names = values.map(String)
  return names.length === 1 ? `It must be ${names[0]}.` : `Give one of ${names.join(', ')}.`
}
