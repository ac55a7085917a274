import { PROBLEMS, problemDetails, type ProblemCode } from '@bellpull/contracts'
import { z } from 'zod'
import { createDocument, type ZodOpenApiResponsesObject } from 'zod-openapi'
import { DOCUMENTED_ROUTES, pathId, type DocumentedRoute } from './routes.js'

type Document = ReturnType<typeof createDocument>
type Operation = NonNullable<Parameters<typeof createDocument>[0]['paths']>[string]

const JSON_TYPE = 'application/json'
const PROBLEM_TYPE = 'application/problem+json'

/** The OpenAPI 3.1 document of the API, made from the contracts that also guard it. */
export function openApiDocument(): Document {
  const paths: Record<string, Operation> = {}
  for (const route of DOCUMENTED_ROUTES) {
    const path = `/api/v1${route.path}`
    paths[path] = { ...paths[path], [route.method]: operation(route) }
  }
  return createDocument({
    openapi: '3.1.0',
    info: {
      title: 'Bellpull',
      version: '1',
      description:
        'Calls from the operating room to its sterile core. A coordination aid: read the label aloud; the surgeon decides. ' +
        'Requests refuse unknown members; answers may gain members, and clients must bear them.',
    },
    security: [{ bearer: [] }],
    paths,
    components: {
      securitySchemes: { bearer: { type: 'http', scheme: 'bearer', bearerFormat: 'JWT' } },
    },
  })
}

function operation(route: DocumentedRoute): NonNullable<Operation>['get'] {
  const header = keyHeader(route)
  return {
    tags: [route.tag],
    summary: route.summary,
    ...(route.anonymous && { security: [] }),
    requestParams: {
      ...(route.path.includes('{id}') && { path: pathId }),
      ...(route.query && { query: route.query }),
      ...(header && { header }),
    },
    ...(route.body && { requestBody: { required: true, content: { [JSON_TYPE]: { schema: route.body } } } }),
    responses: { ...success(route), ...refusals(route) },
  }
}

function keyHeader(route: DocumentedRoute): z.ZodObject | null {
  if (!route.key) return null
  const key = z.uuid().meta({ description: 'The same for every try of one tap: acting twice is harmless.' })
  return z.object({ 'Idempotency-Key': route.key === 'required' ? key : key.optional() })
}

const success = (route: DocumentedRoute): ZodOpenApiResponsesObject =>
  route.answer
    ? { [route.status ?? 200]: { description: 'Done', content: { [JSON_TYPE]: { schema: route.answer } } } }
    : { [route.status ?? 204]: { description: 'Done' } }

/** One answer for each status, naming the problems that have it. */
function refusals(route: DocumentedRoute): ZodOpenApiResponsesObject {
  const codes = new Set<ProblemCode>(route.refusals)
  if (!route.anonymous) codes.add('not-signed-in').add('not-permitted')
  if (route.body) codes.add('malformed-body').add('body-too-large').add('invalid-input')
  if (route.query) codes.add('invalid-input')
  if (route.key === 'required') codes.add('idempotency-key-missing')
  if (route.key) codes.add('idempotency-key-reused').add('in-progress')

  const byStatus = new Map<number, ProblemCode[]>()
  for (const code of codes) {
    const { status } = PROBLEMS[code]
    byStatus.set(status, [...(byStatus.get(status) ?? []), code])
  }
  return Object.fromEntries(
    [...byStatus].map(([status, of]) => [
      status,
      {
        description: of.map((code) => `\`${code}\`: ${PROBLEMS[code].title}`).join('; '),
        content: { [PROBLEM_TYPE]: { schema: problemDetails } },
      },
    ]),
  )
}
