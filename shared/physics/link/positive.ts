/** The value itself; throws a RangeError that names the field unless it is positive and finite. */
export function positive(name: string, value: number): number {
  if (!(value > 0 && Number.isFinite(value))) throw new RangeError(`${name} must be a positive number, it is ${value}`)
  return value
}
