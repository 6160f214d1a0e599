import { describe, expect, it } from 'vitest'
import { canonicalJson, canonicalJsonBytes } from '#shared/formats/canonical-json'

/** The double whose IEEE 754 bits are given in hexadecimal. */
function double(bits: string): number {
  const view = new DataView(new ArrayBuffer(8))
  view.setBigUint64(0, BigInt(`0x${bits}`))
  return view.getFloat64(0)
}

describe('canonical JSON', () => {
  // Source: RFC 8785 appendix B, from memory.
  it.each([
    ['0000000000000000', '0'], ['8000000000000000', '0'], ['0000000000000001', '5e-324'], ['8000000000000001', '-5e-324'], ['7fefffffffffffff', '1.7976931348623157e+308'], ['ffefffffffffffff', '-1.7976931348623157e+308'],
    ['4340000000000000', '9007199254740992'], ['c340000000000000', '-9007199254740992'], ['4430000000000000', '295147905179352830000'], ['44b52d02c7e14af5', '9.999999999999997e+22'], ['44b52d02c7e14af6', '1e+23'],
    ['44b52d02c7e14af7', '1.0000000000000001e+23'], ['444b1ae4d6e2ef4e', '999999999999999700000'], ['444b1ae4d6e2ef4f', '999999999999999900000'], ['444b1ae4d6e2ef50', '1e+21'], ['3eb0c6f7a0b5ed8c', '9.999999999999997e-7'],
    ['3eb0c6f7a0b5ed8d', '0.000001'], ['41b3de4355555553', '333333333.3333332'], ['41b3de4355555554', '333333333.33333325'], ['41b3de4355555555', '333333333.3333333'], ['41b3de4355555556', '333333333.3333334'],
    ['41b3de4355555557', '333333333.33333343'], ['becbf647612f3696', '-0.0000033333333333333333'], ['43143ff3c1cb0959', '1424953923781206.2'],
  ])('writes the double %s as %s', (bits, text) => {
    expect(canonicalJson(double(bits))).toBe(text)
  })

  it('refuses the two numbers of appendix B that JSON cannot hold', () => {
    for (const bits of ['7fffffffffffffff', '7ff0000000000000']) expect(() => canonicalJson({ a: [double(bits)] })).toThrow(/finite number at \$\.a\[0\]/)
  })

  it('gives the bytes of the sample in RFC 8785 §3.2.2 to §3.2.4', () => {
    // Source: RFC 8785, from memory: the sample of §3.2.2 and its UTF-8 bytes of §3.2.4.
    const sample = JSON.parse(String.raw`{
      "numbers": [333333333.33333329, 1E30, 4.50, 2e-3, 0.000000000000000000000000001],
      "string": "\u20ac$\u000F\u000aA'\u0042\u0022\u005c\\\"\/",
      "literals": [null, true, false]
    }`) as unknown
    const bytes = '7b226c69746572616c73223a5b6e756c6c2c747275652c66616c73655d2c226e756d62657273223a5b3333333333333333332e333333333333332c31652b33302c342e352c302e3030322c31652d32375d2c22737472696e67223a22e282ac245c75303030665c6e4127425c225c5c5c5c5c222f227d'
    expect(Buffer.from(canonicalJsonBytes(sample)).toString('hex')).toBe(bytes)
  })

  it('sorts members by UTF-16 code units, as in RFC 8785 §3.2.3', () => {
    // Source: RFC 8785 §3.2.3, from memory.
    const sample = {
      '\u20AC': 'Euro Sign', '\r': 'Carriage Return', '\uFB33': 'Hebrew Letter Dalet With Dagesh', '1': 'One', '\uD83D\uDE00': 'Emoji: Grinning Face', '\u0080': 'Control', '\u00F6': 'Latin Small Letter O With Diaeresis',
    }
    const order = Array.from(canonicalJson(sample).matchAll(/:"([^"]*)"/g), match => match[1])
    expect(order).toEqual(['Carriage Return', 'One', 'Control', 'Latin Small Letter O With Diaeresis', 'Euro Sign', 'Emoji: Grinning Face', 'Hebrew Letter Dalet With Dagesh'])
  })

  it('sorts at every depth and leaves arrays in their order', () => {
    expect(canonicalJson({ b: [{ z: 1, a: 2 }, 'x'], a: { d: {}, c: [] } })).toBe('{"a":{"c":[],"d":{}},"b":[{"a":2,"z":1},"x"]}')
  })

  it('refuses what has no canonical form, and says where', () => {
    const loop: Record<string, unknown> = {}
    loop.self = loop
    const wrong: [unknown, RegExp][] = [
      [{ a: undefined }, /\$\.a is undefined/], [undefined, /\$ is undefined/], [[1, , 2], /\$\[1\] is undefined/], [{ a: 'x\uD800' }, /surrogate.*\$\.a/], [{ a: '\uDC00x' }, /surrogate/], [{ '\uD800': 1 }, /surrogate/], // eslint-disable-line no-sparse-arrays
      [{ at: new Date(0) }, /\$\.at is a Date/], [new Map(), /Map/], [() => 1, /function/], [1n, /bigint/], [Symbol('s'), /symbol/], [loop, /levels deep/], [{ a: -Infinity }, /finite/],
    ]
    for (const [value, message] of wrong) expect(() => canonicalJson(value)).toThrow(message)
  })
})
