/** A drive train's values from a stored log. */
import { identify, type IdentificationReport, type Known } from '../../control/identification/identify.ts'
import { readStored, unpackColumns, type FileAt } from './columns-file.ts'
import { benchLogOf } from './read-log.ts'

export interface IdentifyInputs {
  file: FileAt
  known: Known
}

/** @throws NumericError as identify */
export const identifyLog = ({ file, known }: IdentifyInputs): IdentificationReport => identify(benchLogOf(unpackColumns(readStored(file))), known)
