import { useRef, useState } from 'react'
import { documentText, readDocumentFile } from '../../features/design-form/document-file.ts'
import { toForm } from '../../features/design-form/to-form.ts'
import { Button } from '../../ui/button.tsx'
import { download } from '../../ui/download.ts'
import { Section } from '../../ui/section.tsx'
import { announce } from '../../ui/status.tsx'
import type { DesignPageState } from './use-design-page.ts'

/** The document as a file: out, and where it may be changed, in. A file may be dropped on the section. */
export default function DocumentActs({ page }: { page: DesignPageState }) {
  const { answered, designKey, number, isEditable, dispatch } = page
  const input = useRef<HTMLInputElement>(null)
  const [refusal, setRefusal] = useState<string | null>(null)
  const take = async (file: File | undefined) => {
    if (!file || !isEditable) return
    const read = await readDocumentFile(file)
    if ('refusal' in read) return setRefusal(read.refusal)
    setRefusal(null)
    dispatch({ do: 'replace', doc: toForm(read.design) })
    announce(`Read ${file.name}. One undo brings back what was there.`)
  }
  return (
    <Section title="Document" className="print:hidden">
      {/* biome-ignore lint/a11y/noStaticElementInteractions: the button beside it does the same without a pointer */}
      <div
        onDragOver={(event) => {
          if (isEditable) event.preventDefault()
        }}
        onDrop={(event) => {
          event.preventDefault()
          void take(event.dataTransfer.files[0])
        }}
        className="flex flex-wrap items-center gap-x-4"
      >
        <Button
          look="quiet"
          disabled={!answered.isGood}
          onClick={() => {
            if (answered.document === null) return
            const name = `${designKey}-${number ?? 'new'}.json`
            download(name, documentText(answered.document), 'application/json')
          }}
        >
          Export
        </Button>
        {isEditable ? (
          <>
            <Button look="quiet" onClick={() => input.current?.click()}>
              Import
            </Button>
            <input
              ref={input}
              type="file"
              accept=".json,application/json"
              aria-label="Design document to import"
              hidden
              onChange={(event) => {
                void take(event.target.files?.[0])
                event.target.value = ''
              }}
            />
            <span className="text-small text-ink-3">or drop a .json file here</span>
          </>
        ) : null}
      </div>
      {refusal ? (
        <p role="alert" className="mt-1 text-small text-bad">
          {refusal}
        </p>
      ) : null}
    </Section>
  )
}
