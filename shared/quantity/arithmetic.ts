import { all, create, type MathNode, type Unit as MathUnit } from 'mathjs'
import { OgeeError } from '../errors.ts'
import { limits } from '../limits.ts'
import { type Field, type FieldUnit, fieldUnits, type Quantity, takes } from './field.ts'
import { type Kind, kinds, oneSpelling, unitOf } from './units.ts'

/**
 * Arithmetic with units in a cell, by mathjs. Loaded on first use only: it is larger than everything else together.
 * Locked down twice: functions that define or evaluate are switched off, and only numbers, + - * / ^, parentheses,
 * known units, sqrt and abs are let through before anything is evaluated.
 */
const math = create(all!)
const parse = math.parse
math.createUnit('ppm')
math.createUnit('ppb', '0.001 ppm')
math.createUnit('pct', '10000 ppm')
math.createUnit('LSB')
const off = (): never => {
  throw new Error('switched off')
}
math.import(
  { import: off, createUnit: off, evaluate: off, parse: off, simplify: off, derivative: off },
  { override: true },
)

const operators = new Set(['+', '-', '*', '/', '^'])
const functions = new Set(['sqrt', 'abs'])

/** mathjs's name of the base unit of a kind, and the power of ten that our base is of it. */
const bases: Partial<Record<Kind, readonly [string, number]>> = {
  voltage: ['V', 0],
  resistance: ['ohm', 0],
  current: ['A', 0],
  ratio: ['ppm', -6],
  lsb: ['LSB', 0],
  'temperature-difference': ['K', 0],
  'per-volt': ['V^-1', 0],
  'per-kelvin': ['ppm K^-1', -6],
}

/**
 * The value of an expression in the field's unit.
 * @param text at most 200 characters
 * @throws quantity-unreadable, quantity-wrong-kind
 * @example evaluateQuantity('10/4096 V', { label: 'Step', unit: 'V' }).value // 0.00244140625
 */
export function evaluateQuantity(text: string, field: Field): Quantity {
  if (text.length > limits.expressionMax)
    unreadable(text, `at most ${limits.expressionMax} characters are read`)
  const result = evaluate(text)
  const units = fieldUnits(field)
  if (typeof result === 'number') return finite(result, units[0]!, text)
  for (const unit of units) {
    const base = bases[unit.kind]
    if (base === undefined || !result.equalBase(math.unit(1, base[0]))) continue
    return finite(shifted(result.toNumber(base[0]), base[1] - unit.exponent), unit, text)
  }
  throw new OgeeError('quantity-wrong-kind', `${takes(field)} ${text.trim()} is ${nameOf(result)}.`)
}

function evaluate(text: string): number | MathUnit {
  const prepared = oneSpelling(text.trim()).replace(/×|·/g, '*').replace(/%/g, ' pct')
  let result: unknown
  try {
    const node = parse(prepared)
    node.traverse((part) => allow(part, text))
    result = node.compile().evaluate()
  } catch (cause) {
    if (cause instanceof OgeeError) throw cause
    unreadable(text, 'it is not arithmetic with fitting units')
  }
  if (typeof result === 'number' || math.isUnit(result)) return result
  return unreadable(text, 'it does not give one quantity')
}

function allow(node: MathNode, text: string): void {
  if (math.isConstantNode(node)) {
    if (typeof node.value === 'number') return
  } else if (math.isParenthesisNode(node)) return
  else if (math.isOperatorNode(node)) {
    if (operators.has(node.op)) return
  } else if (math.isFunctionNode(node)) {
    if (math.isSymbolNode(node.fn) && functions.has(node.fn.name)) return
  } else if (math.isSymbolNode(node)) {
    const unit = unitOf(node.name)
    if (functions.has(node.name) || node.name === 'pct') return
    if (unit !== null && unit.kind !== 'temperature' && unit.kind !== 'bits') return
  }
  unreadable(text, `${node.toString()} is not read here`)
}

/** v·10^exponent with one rounding: powers of ten up to 10^22 are exact doubles. */
function shifted(v: number, exponent: number): number {
  const power = Number(`1e${Math.abs(exponent)}`)
  return exponent < 0 ? v / power : v * power
}

function finite(value: number, unit: FieldUnit, text: string): Quantity {
  if (!Number.isFinite(value)) unreadable(text, 'the result is not a finite number')
  return { value: value === 0 ? 0 : value, unit: unit.symbol, kind: unit.kind, typed: text }
}

function nameOf(result: MathUnit): string {
  for (const [kind, base] of Object.entries(bases)) {
    if (base !== undefined && result.equalBase(math.unit(1, base[0]))) return kinds[kind as Kind].name
  }
  return 'another kind of quantity'
}

function unreadable(text: string, why: string): never {
  throw new OgeeError('quantity-unreadable', `${text.trim()}: ${why}.`)
}
