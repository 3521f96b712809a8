import { queryOptions } from '@tanstack/react-query'
import { get } from '../../lib/api-client.ts'
import type { ApiDocument } from './api-document.ts'

/** The API's own document; it alters with the program only. */
export const apiDocumentQuery = queryOptions({ queryKey: ['openapi'], queryFn: ({ signal }) => get<ApiDocument>('/openapi.json', { signal }), staleTime: Infinity })
