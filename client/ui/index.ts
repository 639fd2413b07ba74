/**
 * The parts of the house. Import each from its file (`#client/ui/button.tsx`); they know no feature.
 *
 * | part | file | props |
 * |---|---|---|
 * | Page, Section, DefinitionRows | page.tsx | title, lead, over, actions, shortcuts · title, aside · rows {label, value, strong} |
 * | Button, LinkButton | button.tsx | kind primary/secondary/quiet/destructive, sending, disabled, onPress · to |
 * | Money, moneyText | money.tsx | amount, currency, alone |
 * | Figure | figure.tsx | amount, currency, why (Derivation), id, alone |
 * | MarginNote | margin.tsx | children shown under the reasons |
 * | PairMark, pairWords | pair-mark.tsx | eyes {eye, state, money}, size |
 * | Tie | tie.tsx | difference (null: not known), currency, awaited |
 * | SheetTable | sheet-table.tsx | caption, columns {id, head, cell, align, wide}, rows, rowKey, total (rows of tfoot) |
 * | Ledger | ledger.tsx | long tables: sort, filter, keyboard, CSV |
 * | TextField, DateField, TextAreaField, SelectField, CheckField, MoneyField, Field | fields.tsx | label, hint, error, value/onChange(value) · amount/onAmount |
 * | Dialog, ConfirmDialog | dialog.tsx | title, open, onClose · confirm, onConfirm, sending, destructive, error |
 * | Skeleton, EmptyState, ErrorState, StateWord, Caution | states.tsx | rows · title, action · error, retry · tone |
 * | AnnouncerProvider, useAnnounce | announcer.tsx | |
 * | useShortcut | shortcuts.tsx | key, run |
 * | EyeColumns, EYE_NAMES | eye-columns.tsx | children(eye), headings |
 * | PrescriptionFields, echoWords | prescription-fields.tsx | typed, onType(field, text), errors, showAll |
 * | Wordmark | wordmark.tsx | bare |
 */
export {};
