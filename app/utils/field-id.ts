/**
 * The id of the element that edits a field, from the field's path, so that an error summary can link to it.
 *
 * @example fieldId('cautions.cardiac-device') // => 'field-cautions-cardiac-device'
 */
export function fieldId(path: string): string {
  return `field-${path.replace(/[^\w-]+/g, '-')}`
}

/** Brings the field into view and puts the cursor into it; in a group of choices, on the chosen or first one. */
export function focusField(path: string) {
  const element = document.getElementById(fieldId(path))
  if (!element) return
  const target = element.matches('input, select, textarea, button') ? element : element.querySelector<HTMLElement>('input:checked, input, select, textarea, button') ?? element
  target.scrollIntoView({ block: 'center' })
  target.focus()
}
