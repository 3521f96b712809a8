import { readFileSync } from 'node:fs'
import { expectParameterSchema } from '../../shared/registers/read-parameter-schema.ts'
import type { ParameterSchema } from '../../shared/registers/parameter-schema.ts'

export type Json = Record<string, unknown>

export const FIRMWARE = ['hinge-2.0.0', 'hinge-2.1.0', 'capstan-1.2.0', 'capstan-1.3.0'] as const

export const firmwareText = (name: (typeof FIRMWARE)[number]): string => readFileSync(`examples/firmware/${name}.schema.json`, 'utf8')
export const firmwareJson = (name: (typeof FIRMWARE)[number]): Json => JSON.parse(firmwareText(name)) as Json
export const firmware = (name: (typeof FIRMWARE)[number]): ParameterSchema => expectParameterSchema(firmwareJson(name))

/** A schema with the given parameters in an image of 64 bytes. */
export const schemaJson = (properties: Json, image: Json = {}, root: Json = {}): Json => ({ type: 'object', 'x-image': { length: 64, ...image }, properties, ...root })

export const aSchema = (properties: Json, image: Json = {}, root: Json = {}): ParameterSchema => expectParameterSchema(schemaJson(properties, image, root))

/** One number `v` in one register. */
export const oneNumber = (register: Json, leaf: Json = {}): ParameterSchema => aSchema({ v: { type: 'number', ...leaf, 'x-register': { address: 0, ...register } } })
