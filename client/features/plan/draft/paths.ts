export { getAt, numberAt, setAt, textAt, type DraftDocument } from '#shared/design/document-paths.ts'
