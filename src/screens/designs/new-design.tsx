import { useState } from 'react'
import type { TemplateName } from '../../features/design-form/template-list.ts'
import { fromTemplate } from '../../features/design-form/templates.ts'
import { DesignPage } from '../design-page/design-page.tsx'

/** A design that the server does not have yet, from a template. */
export default function NewDesign({
  designKey,
  template,
  title,
}: {
  designKey: string
  template: TemplateName
  title: string
}) {
  const [doc] = useState(() => fromTemplate(template, title))
  return <DesignPage start={{ designKey, revision: null, doc }} />
}
