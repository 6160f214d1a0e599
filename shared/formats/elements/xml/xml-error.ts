/** Why a text is not XML that may be read, and where. */
export class XmlError extends Error {
  constructor(readonly line: number, readonly column: number, readonly code: 'xml' | 'xml-dtd' | 'xml-entity' | 'xml-limit', message: string) {
    super(message)
    this.name = 'XmlError'
  }
}
