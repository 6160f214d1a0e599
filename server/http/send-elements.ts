import type { H3Event } from 'h3'
import { send, setResponseHeaders } from 'h3'
import type { ElementsFile } from '~~/server/domain/elements/download-element-sets'

/** Element sets as a file: the browser stores it and never shows it as a page. What a TLE rounds is named in a header. */
export async function sendElements(event: H3Event, { text, mediaType, fileName, rounded }: ElementsFile): Promise<undefined> {
  setResponseHeaders(event, {
    'content-disposition': `attachment; filename="${fileName}"`,
    ...rounded.length > 0 && { 'rounded-values': rounded.join(', ') },
  })
  await send(event, text, `${mediaType}; charset=utf-8`)
}
