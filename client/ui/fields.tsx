import {
  type ChangeEvent,
  type InputHTMLAttributes,
  type ReactNode,
  type SelectHTMLAttributes,
  type TextareaHTMLAttributes,
  useId,
  useState,
} from 'react';
import { type CurrencyCode, formatAmount, type Minor, parseMoney } from '#domain/money/index';

const CONTROL =
  'w-full min-h-10 rounded-sm border bg-sheet px-3 text-body text-ink placeholder:text-soft aria-invalid:border-bengal';

interface FieldFrame {
  readonly label: ReactNode;
  readonly hint?: ReactNode;
  /** What is wrong, in words; linked to the control. */
  readonly error?: string | undefined;
  readonly className?: string;
}

/** Label above, hint and error under, all linked to the control. */
export function Field({
  label,
  hint,
  error,
  className = '',
  id,
  children,
}: FieldFrame & {
  readonly id: string;
  readonly children: (linked: {
    id: string;
    'aria-describedby': string | undefined;
    'aria-invalid': boolean | undefined;
  }) => ReactNode;
}) {
  const described = [hint ? `${id}-hint` : '', error ? `${id}-error` : '']
    .filter((each) => each !== '')
    .join(' ');
  return (
    <div className={className}>
      <label htmlFor={id} className="mb-1 block text-small font-semibold">
        {label}
      </label>
      {children({
        id,
        'aria-describedby': described === '' ? undefined : described,
        'aria-invalid': error ? true : undefined,
      })}
      {hint ? (
        <p id={`${id}-hint`} className="mt-1 text-small text-soft">
          {hint}
        </p>
      ) : null}
      {error ? (
        <p id={`${id}-error`} role="alert" className="mt-1 text-small font-semibold text-bengal">
          {error}
        </p>
      ) : null}
    </div>
  );
}

type Native<T> = Omit<T, 'className' | 'id'>;

/** One line of text. */
export function TextField({
  label,
  hint,
  error,
  className = '',
  onChange,
  ...rest
}: FieldFrame &
  Native<Omit<InputHTMLAttributes<HTMLInputElement>, 'onChange'>> & {
    readonly onChange?: (value: string) => void;
  }) {
  const id = useId();
  return (
    <Field id={id} label={label} hint={hint} error={error} className={className}>
      {(linked) => (
        <input
          {...linked}
          {...rest}
          onChange={(event) => onChange?.(event.target.value)}
          className={`${CONTROL} ${error ? 'border-bengal' : 'border-edge'}`}
        />
      )}
    </Field>
  );
}

/** A day of the calendar. */
export function DateField(props: Parameters<typeof TextField>[0]) {
  return <TextField {...props} type="date" />;
}

/** Several lines of text. */
export function TextAreaField({
  label,
  hint,
  error,
  className = '',
  onChange,
  ...rest
}: FieldFrame &
  Native<Omit<TextareaHTMLAttributes<HTMLTextAreaElement>, 'onChange'>> & {
    readonly onChange?: (value: string) => void;
  }) {
  const id = useId();
  return (
    <Field id={id} label={label} hint={hint} error={error} className={className}>
      {(linked) => (
        <textarea
          rows={3}
          {...linked}
          {...rest}
          onChange={(event) => onChange?.(event.target.value)}
          className={`${CONTROL} py-2 ${error ? 'border-bengal' : 'border-edge'}`}
        />
      )}
    </Field>
  );
}

export interface SelectChoice {
  readonly value: string;
  readonly label: string;
}

/** One of a few. */
export function SelectField({
  label,
  hint,
  error,
  className = '',
  choices,
  onChange,
  ...rest
}: FieldFrame &
  Native<Omit<SelectHTMLAttributes<HTMLSelectElement>, 'onChange'>> & {
    readonly choices: readonly SelectChoice[];
    readonly onChange?: (value: string) => void;
  }) {
  const id = useId();
  return (
    <Field id={id} label={label} hint={hint} error={error} className={className}>
      {(linked) => (
        <select
          {...linked}
          {...rest}
          onChange={(event) => onChange?.(event.target.value)}
          className={`${CONTROL} ${error ? 'border-bengal' : 'border-edge'}`}
        >
          {choices.map((choice) => (
            <option key={choice.value} value={choice.value}>
              {choice.label}
            </option>
          ))}
        </select>
      )}
    </Field>
  );
}

/** A statement to tick. */
export function CheckField({
  label,
  error,
  checked,
  onChange,
  disabled = false,
}: {
  readonly label: ReactNode;
  readonly error?: string | undefined;
  readonly checked: boolean;
  readonly onChange: (checked: boolean) => void;
  readonly disabled?: boolean;
}) {
  const id = useId();
  return (
    <div>
      <div className="flex min-h-8 items-start gap-3">
        <input
          id={id}
          type="checkbox"
          checked={checked}
          disabled={disabled}
          onChange={(event: ChangeEvent<HTMLInputElement>) => onChange(event.target.checked)}
          className="mt-0.5 size-5 shrink-0 accent-trypan"
          aria-describedby={error ? `${id}-error` : undefined}
        />
        <label htmlFor={id}>{label}</label>
      </div>
      {error ? (
        <p id={`${id}-error`} role="alert" className="text-small font-semibold text-bengal">
          {error}
        </p>
      ) : null}
    </div>
  );
}

export interface MoneyFieldProps extends FieldFrame {
  readonly currency: CurrencyCode | string;
  /** The amount as it is understood; null while nothing sensible stands in the field. */
  readonly amount: Minor | null;
  readonly onAmount: (amount: Minor | null) => void;
  readonly disabled?: boolean;
  readonly autoFocus?: boolean;
}

const REFUSALS = {
  empty: undefined,
  not_an_amount: 'This is not an amount.',
  too_many_decimals: 'Too many decimals for this currency.',
  too_large: 'This amount is too large.',
} as const;

/** Money as people type it ("1,250", "1250.5"), shown back formatted when they leave it. */
export function MoneyField({
  currency,
  amount,
  onAmount,
  error,
  disabled,
  autoFocus,
  ...frame
}: MoneyFieldProps) {
  const id = useId();
  const code = currency as CurrencyCode;
  const [typed, setTyped] = useState<string | null>(null);
  const [refusal, setRefusal] = useState<string | undefined>();
  const shown = typed ?? (amount === null ? '' : formatAmount(amount, code));
  return (
    <Field id={id} {...frame} error={error ?? refusal}>
      {(linked) => (
        <input
          {...linked}
          inputMode="decimal"
          autoComplete="off"
          disabled={disabled}
          // biome-ignore lint/a11y/noAutofocus: set only where the amount is what the person came to type
          autoFocus={autoFocus}
          value={shown}
          onChange={(event) => {
            setTyped(event.target.value);
            const parsed = parseMoney(event.target.value, code);
            setRefusal(undefined);
            onAmount(parsed.ok ? parsed.amount : null);
          }}
          onBlur={() => {
            if (typed === null) return;
            const parsed = parseMoney(typed, code);
            if (parsed.ok) setTyped(null);
            setRefusal(parsed.ok ? undefined : REFUSALS[parsed.why]);
          }}
          className={`${CONTROL} tabular text-right ${error || refusal ? 'border-bengal' : 'border-edge'}`}
        />
      )}
    </Field>
  );
}
