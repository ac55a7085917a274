import type { openApiDocument } from './openapi.js'
import { DOCUMENTED_ROUTES } from './routes.js'

/** The document as a page that needs no script and nothing from elsewhere. */
export function docsPage(document: ReturnType<typeof openApiDocument>): string {
  const tags = [...new Set(DOCUMENTED_ROUTES.map((route) => route.tag))]
  const sections = tags.map((tag) => {
    const routes = DOCUMENTED_ROUTES.filter((route) => route.tag === tag)
    return `<h2>${escape(tag)}</h2>${routes.map((route) => routeHtml(document, route.path, route.method)).join('')}`
  })
  const schemas = Object.entries(document.components?.schemas ?? {}).map(
    ([name, schema]) =>
      `<details id="schema-${escape(name)}"><summary>${escape(name)}</summary>${json(schema)}</details>`,
  )
  return `<!doctype html>
<html lang="en">
<head><meta charset="utf-8"><meta name="viewport" content="width=device-width"><title>Bellpull API</title><style>${STYLE}</style></head>
<body><main>
<h1>Bellpull API</h1>
<p>${escape(document.info.description ?? '')}</p>
<p>For machines: <a href="/api/v1/openapi.json">openapi.json</a></p>
${sections.join('\n')}
<h2>Shapes</h2>
${schemas.join('\n')}
</main></body></html>`
}

function routeHtml(document: ReturnType<typeof openApiDocument>, path: string, method: string): string {
  const full = `/api/v1${path}`
  const item = document.paths?.[full] as Record<string, OperationText> | undefined
  const operation = item?.[method]
  if (!operation) return ''
  const answers = Object.entries(operation.responses ?? {}).map(
    ([status, answer]) =>
      `<dt>${escape(status)}</dt><dd>${escape(answer.description ?? '')}${shape(answer.content)}</dd>`,
  )
  const parameters = (operation.parameters ?? []).map(
    (parameter) =>
      `<li><code>${escape(parameter.name)}</code> in ${escape(parameter.in)}${parameter.required ? ', required' : ''}</li>`,
  )
  return `<details><summary><b>${method.toUpperCase()}</b> <code>${escape(full)}</code> ${escape(operation.summary ?? '')}</summary>
${parameters.length > 0 ? `<ul>${parameters.join('')}</ul>` : ''}
${operation.requestBody ? `<p>Body</p>${shape(operation.requestBody.content)}` : ''}
<dl>${answers.join('')}</dl></details>`
}

interface OperationText {
  readonly summary?: string
  readonly parameters?: ReadonlyArray<{ name: string; in: string; required?: boolean }>
  readonly requestBody?: { content?: ContentText }
  readonly responses?: Record<string, { description?: string; content?: ContentText }>
}
type ContentText = Record<string, { schema?: unknown }>

const shape = (content: ContentText | undefined): string =>
  Object.values(content ?? {})
    .map(({ schema }) => json(schema))
    .join('')

const json = (value: unknown): string => `<pre>${escape(JSON.stringify(value, null, 2))}</pre>`

const escape = (text: string): string =>
  text.replaceAll('&', '&amp;').replaceAll('<', '&lt;').replaceAll('>', '&gt;').replaceAll('"', '&quot;')

const STYLE = `
body { font: 16px/1.5 Roboto, sans-serif; color: #1b2430; background: #f6f3ec; margin: 0 }
main { max-width: 60rem; margin: 0 auto; padding: 1.5rem }
a { color: #80560c } summary { cursor: pointer; padding: .5rem 0 } details { border-top: 1px solid #dcd5c6 }
pre { background: #fff; border: 1px solid #dcd5c6; padding: .75rem; overflow: auto; font-size: 13px }
dt { font-weight: 700 } dd { margin: 0 0 .5rem 1rem }
@media (prefers-color-scheme: dark) {
  body { color: #eef0ee; background: #12181f } a { color: #e8bb62 }
  details, pre { border-color: #34404d } pre { background: #1a222b }
}`
