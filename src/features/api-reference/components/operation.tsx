import { membersOf, schemaWords } from '../api-document.ts'
import type { Listed } from '../api-document.ts'

const methodWords: Record<string, string> = { get: 'reads', post: 'does', put: 'puts', patch: 'alters', delete: 'ends' }

/** One operation: closed a line, open everything that is known of it. */
export function Operation({ operation }: { operation: Listed }) {
  const { method, path, summary, description, parameters, requestBody, responses, operationId, security } = operation
  const [type, body] = Object.entries(requestBody?.content ?? {})[0] ?? []
  const done = responses['2XX']
  return (
    <details id={operationId} className="border-b border-hairline py-[6px]">
      <summary className="cursor-pointer">
        <span className="num inline-block w-[4.5em] text-13 font-medium uppercase">{method}</span>
        <span className="num text-13 break-all">{path}</span>
        <span className="ml-3 text-13 text-ink-2">{summary}</span>
      </summary>
      <div className="grid gap-3 py-3 pl-[18px] text-13">
        <p>
          <span className="sr-only">It {methodWords[method] ?? method} something. </span>
          {description ?? 'Needs no session.'} {security.some((s) => 'benchKey' in s) && 'A bench key may take it too.'}
        </p>
        {parameters.length > 0 && (
          <div className="table-frame">
            <table className="table table-dense" aria-label={`parameters of ${method} ${path}`}>
              <thead>
                <tr>
                  <th scope="col">Parameter</th>
                  <th scope="col">Stands in</th>
                  <th scope="col">Takes</th>
                </tr>
              </thead>
              <tbody>
                {parameters.map((p) => (
                  <tr key={`${p.in} ${p.name}`}>
                    <td className="num">{p.name}</td>
                    <td className="whitespace-nowrap">
                      {p.in}
                      {p.required ? '' : ', optional'}
                    </td>
                    <td>
                      {p.description} {p.example !== undefined && <span className="text-ink-2">such as <span className="num">{p.example}</span></span>}
                    </td>
                  </tr>
                ))}
              </tbody>
            </table>
          </div>
        )}
        {body && (
          <>
            <p className="text-ink-2">
              Body, <span className="num">{type}</span>
              {membersOf(body.schema).length === 0 && ': an empty object'}
            </p>
            {membersOf(body.schema).length > 0 && (
              <div className="table-frame">
                <table className="table table-dense" aria-label={`body of ${method} ${path}`}>
                  <thead>
                    <tr>
                      <th scope="col">Member</th>
                      <th scope="col">Takes</th>
                      <th scope="col">What it is</th>
                    </tr>
                  </thead>
                  <tbody>
                    {membersOf(body.schema).map((m) => (
                      <tr key={m.name}>
                        <td className="num">
                          {m.name}
                          {!m.required && <span className="text-ink-2"> optional</span>}
                        </td>
                        <td>{schemaWords(m.schema)}</td>
                        <td className="text-ink-2">{m.schema.description}</td>
                      </tr>
                    ))}
                  </tbody>
                </table>
              </div>
            )}
            {body.example !== undefined && (
              <pre tabIndex={0} aria-label={`example of ${method} ${path}`} className="num overflow-x-auto border border-hairline bg-sheet p-3 text-12">
                {JSON.stringify(body.example, null, 2)}
              </pre>
            )}
          </>
        )}
        {done && (
          <p className="text-ink-2">
            Answers <span className="num">{Object.keys(done.content).join(', ')}</span>: {done.description}. Refusals are problem documents (RFC 9457).
          </p>
        )}
      </div>
    </details>
  )
}
