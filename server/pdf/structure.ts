/**
 * What stands in the structure tree of the PDF (ISO 32000-1:2008, 14.7 and 14.8.4: standard structure types): made beside
 * the content, in reading order, and joined to it when the pages are drawn. Whatever is drawn without a tag is an
 * artefact: running heads and feet, rules, the watermark.
 */
export type TagName = 'Document' | 'Sect' | 'H1' | 'H2' | 'H3' | 'P' | 'L' | 'LI' | 'Lbl' | 'LBody' | 'Table' | 'TR' | 'TH' | 'TD' | 'Figure'

export interface TagFacts {
  /** A figure in words. */
  alt?: string
  /** What a head cell is the head of. */
  scope?: 'Column' | 'Row'
  /** A name for those who look through the tree. */
  title?: string
  /** Belongs to the text only where it stands first; repeated on later pages it is an artefact. */
  once?: boolean
}
export interface Tag extends TagFacts { name: TagName, children: Tag[] }

declare module 'pdfmake/interfaces' {
  /** pdfmake hands properties that it does not know through to the drawing. */
  interface Style { tag?: Tag }
}

export const newTag = (name: TagName, facts: TagFacts = {}): Tag => ({ ...facts, name, children: [] })

/**
 * A further element below another, after those it has.
 *
 * @example addTag(row, 'TH', { scope: 'Column' })
 */
export function addTag(parent: Tag, name: TagName, facts: TagFacts = {}): Tag {
  const tag = newTag(name, facts)
  parent.children.push(tag)
  return tag
}
