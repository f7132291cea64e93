import { Dialog } from './dialog.tsx'
import { Keys } from './kbd.tsx'

/** All keys, by the place where they work; the help page and the dialog show the same list. */
export const keyTable: readonly { place: string; keys: readonly { keys: string; act: string }[] }[] = [
  {
    place: 'Everywhere',
    keys: [
      { keys: '/', act: 'find' },
      { keys: '?', act: 'show these keys' },
      { keys: 'F8', act: 'next finding' },
      { keys: 'Esc', act: 'close, or take back what was typed in a field' },
    ],
  },
  {
    place: 'In a list',
    keys: [
      { keys: 'Up Down', act: 'row before, row after' },
      { keys: 'Left Right', act: 'cell before, cell after' },
      { keys: 'Home End', act: 'first and last cell of the row' },
      { keys: 'Ctrl Home', act: 'first row' },
      { keys: 'Ctrl End', act: 'last row' },
      { keys: 'Enter', act: 'open' },
      { keys: 'Space', act: 'select' },
      { keys: 'P', act: 'print' },
    ],
  },
  {
    place: 'In the plan',
    keys: [
      { keys: 'Ctrl Enter', act: 'next step' },
      { keys: 'Ctrl Shift Up', act: 'move the stage up' },
      { keys: 'Ctrl Shift Down', act: 'move the stage down' },
      {
        keys: 'Up Down',
        act: 'step a value: the next standard value in a part, the last shown digit elsewhere',
      },
      { keys: 'Shift Up', act: 'ten steps' },
      { keys: 'Ctrl Z', act: 'undo' },
      { keys: 'Ctrl Shift Z', act: 'redo' },
    ],
  },
  {
    place: 'In a drawing',
    keys: [
      { keys: 'Left Right', act: 'node before and after, or the reading cursor' },
      { keys: 'Up Down', act: 'limit, worst case and level of the node' },
      { keys: 'Enter', act: 'go to the field that sets it' },
      { keys: 'W', act: 'worst case' },
      { keys: 'S', act: 'signed revision' },
      { keys: 'V', act: 'volts, or share of the region' },
      { keys: 'G', act: 'grid' },
      { keys: 'L', act: 'next limit or mark' },
      { keys: 'T', act: 'table of the drawing' },
    ],
  },
]

/** `level` of the headings: below the title that stands over them. */
export function KeyTables({ level: Heading }: { level: 'h2' | 'h3' }) {
  return (
    <div className="grid gap-x-8 gap-y-5 sm:grid-cols-2">
      {keyTable.map((section) => (
        <section key={section.place}>
          <Heading className="border-b border-frame pb-1 text-14">{section.place}</Heading>
          <dl className="ruled">
            {section.keys.map((entry) => (
              <div
                key={entry.keys + entry.act}
                className="grid grid-cols-[7.5rem_1fr] items-baseline gap-2 py-1 text-13"
              >
                <dt>
                  <Keys of={entry.keys} />
                </dt>
                <dd>{entry.act}</dd>
              </div>
            ))}
          </dl>
        </section>
      ))}
    </div>
  )
}

export function KeysDialog({ open, onClose }: { open: boolean; onClose(): void }) {
  return (
    <Dialog open={open} onClose={onClose} title="Keys" wide>
      <KeyTables level="h3" />
      <p className="mt-4 text-12 text-ink-2">
        Single letters work only while a list or a drawing has focus. They can be turned off under{' '}
        <i>Units and keys</i>.
      </p>
    </Dialog>
  )
}
