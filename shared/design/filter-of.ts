import type { FilterSpec } from '#shared/filters/filter-spec.ts'
import { sizeFilter } from '#shared/filters/size-filter.ts'
import { resolveReferences } from './references.ts'
import type { Design } from './schema.ts'

/** The filter of a design, levels from its shift reference. */
export const filterOf = (design: Design): FilterSpec => sizeFilter(design, resolveReferences(design).shift)
