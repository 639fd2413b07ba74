import { useState } from 'react';
import { Button, type ButtonKind } from '#client/ui/button.tsx';
import { ConfirmDialog } from '#client/ui/dialog.tsx';
import {
  CheckField,
  DateField,
  MoneyField,
  SelectField,
  TextAreaField,
  TextField,
} from '#client/ui/fields.tsx';
import { Figure } from '#client/ui/figure.tsx';
import { Ledger } from '#client/ui/ledger.tsx';
import { Money, moneyText } from '#client/ui/money.tsx';
import { DefinitionRows, Page, Section } from '#client/ui/page.tsx';
import { type PairEye, PairMark } from '#client/ui/pair-mark.tsx';
import { SheetTable } from '#client/ui/sheet-table.tsx';
import { Caution, EmptyState, ErrorState, Skeleton, StateWord } from '#client/ui/states.tsx';
import { Tie } from '#client/ui/tie.tsx';
import { Wordmark } from '#client/ui/wordmark.tsx';
import { type Minor, minor } from '#domain/money/index';

const WHY = {
  title: '150.00 for the right eye',
  steps: [
    { label: 'Entered', text: '−2.00 −1.50 × 75' },
    { label: 'Cylinder', text: '1.50 D', rule: 'cylinder-1.50', version: 'price book 7' },
    { label: 'Surcharge', amountMinor: 15_000 },
  ],
  note: 'The other notation gives the same band.',
};

const PAIRS: readonly (readonly PairEye[])[] = [
  [
    { eye: 'OD', state: 'planned', money: 'none' },
    { eye: 'OS', state: 'planned', money: 'half' },
  ],
  [
    { eye: 'OD', state: 'done', money: 'whole' },
    { eye: 'OS', state: 'planned', money: 'half' },
  ],
  [
    { eye: 'OD', state: 'done', money: 'whole' },
    { eye: 'OS', state: 'cancelled', money: 'none' },
  ],
  [{ eye: 'OS', state: 'done', money: 'whole' }],
];

const KINDS: readonly ButtonKind[] = ['primary', 'secondary', 'quiet', 'destructive'];

const LINES = Array.from({ length: 10_000 }, (_each, index) => ({
  no: index + 1,
  words: `Receipt ${String(index + 1).padStart(5, '0')}`,
  amount: ((index * 7_919) % 500_000) - 20_000,
}));

/** Every part of the house in every state: only in development. */
export function PartsPage() {
  const [amount, setAmount] = useState<Minor | null>(minor(125_050));
  const [ticked, setTicked] = useState(true);
  const [open, setOpen] = useState(false);
  return (
    <Page
      title="The parts"
      lead="Each in every state, light and dark."
      shortcuts={[{ keys: 'n', words: 'new here' }]}
    >
      <Section title="Mark and pair">
        <div className="flex flex-wrap items-center gap-6">
          <Wordmark />
          {PAIRS.map((eyes) => (
            <PairMark key={JSON.stringify(eyes)} eyes={eyes} size="large" />
          ))}
        </div>
      </Section>
      <Section title="Figures and ties">
        <div className="flex flex-wrap items-baseline gap-6">
          <Figure id="part" amount={15_000} currency="EUR" why={WHY} />
          <Money amount={-196_000} currency="EUR" />
          <Money amount={456_000} currency="EUR" alone />
          <Money amount={1_250} currency="KWD" alone />
          <Tie difference={0} currency="EUR" />
          <Tie difference={-200} currency="EUR" />
          <Tie difference={null} currency="EUR" awaited />
        </div>
      </Section>
      <Section title="Buttons">
        <div className="flex flex-wrap items-center gap-4">
          {KINDS.map((kind) => (
            <Button key={kind} kind={kind}>
              {kind}
            </Button>
          ))}
          <Button kind="primary" sending>
            sending
          </Button>
          <Button kind="primary" disabled>
            disabled
          </Button>
          <Button onPress={() => setOpen(true)}>Ask first</Button>
        </div>
        <ConfirmDialog
          title="Void this receipt"
          open={open}
          onClose={() => setOpen(false)}
          confirm="Void it"
          destructive
          onConfirm={() => setOpen(false)}
          error="The day is closed. Nothing was changed."
        >
          The number stays and the entry is reversed.
        </ConfirmDialog>
      </Section>
      <Section title="Fields">
        <div className="grid gap-4 sm:grid-cols-2">
          <TextField label="Name" hint="As on the passport." defaultValue="Mara Quillfeather" />
          <TextField label="E-mail" error="This is no e-mail address." defaultValue="mara@" />
          <MoneyField label="Amount, EUR" currency="EUR" amount={amount} onAmount={setAmount} />
          <DateField label="Day" defaultValue="2026-03-12" />
          <SelectField
            label="Tender"
            choices={[
              { value: 'cash', label: 'Cash' },
              { value: 'card', label: 'Card machine' },
            ]}
          />
          <TextAreaField label="Reason" hint="Both people see it." />
          <CheckField label="I have read it" checked={ticked} onChange={setTicked} />
          <TextField label="Not yours to change" disabled defaultValue="LQ-26-00881" />
        </div>
      </Section>
      <Section title="Tables">
        <SheetTable
          caption="A quote’s rows"
          rows={[
            { row: 'Surgery', od: 235_000, os: 190_000 },
            { row: 'Second eye on the same day', od: null, os: -19_000 },
          ]}
          rowKey={(row) => row.row}
          columns={[
            { id: 'row', head: 'Option A', cell: (row) => row.row },
            {
              id: 'od',
              head: 'OD, €',
              align: 'right',
              cell: (row) => (row.od === null ? '' : <Money amount={row.od} currency="EUR" />),
            },
            {
              id: 'os',
              head: 'OS, €',
              align: 'right',
              cell: (row) => <Money amount={row.os} currency="EUR" />,
            },
          ]}
        />
        <div className="mt-6 max-w-md">
          <DefinitionRows
            rows={[
              { label: 'Float', value: '200.00' },
              { label: 'Should hold', value: '1,284.00', strong: true },
            ]}
          />
        </div>
      </Section>
      <Section title="Ledger of ten thousand rows">
        <Ledger
          caption="Receipts"
          filename="receipts.csv"
          rows={LINES}
          columns={[
            { id: 'words', head: 'Receipt', width: '1fr', value: (line) => line.words },
            {
              id: 'amount',
              head: 'Amount, EUR',
              width: '9rem',
              align: 'right',
              value: (line) => line.amount,
              cell: (line) => <Money amount={line.amount} currency="EUR" />,
              csv: (line) => moneyText(line.amount, 'EUR'),
            },
          ]}
        />
      </Section>
      <Section title="States">
        <div className="flex flex-wrap gap-6">
          <StateWord tone="settled">paid</StateWord>
          <StateWord tone="waiting">awaited</StateWord>
          <StateWord tone="wrong">void</StateWord>
          <StateWord tone="plain">draft</StateWord>
        </div>
        <div className="mt-6 grid gap-6">
          <Skeleton rows={2} />
          <EmptyState title="No receipt yet today">Payments appear here.</EmptyState>
          <ErrorState
            error={new Error('The server cannot be reached just now. What you typed is kept.')}
            retry={() => undefined}
          />
        </div>
      </Section>
      <Caution>Whether an eye may be treated is the surgeon’s decision.</Caution>
    </Page>
  );
}
