import { Button } from '#client/ui/button.tsx';
import { CheckField, DateField, SelectField, TextField } from '#client/ui/fields.tsx';
import { EYES, type Laterality } from '#domain/eye';
import { formatAmount } from '#domain/money/index';
import { type AddOn, type Discount, formatRate, type PriceBook } from '#domain/pricing/index';
import type { OptionDraft } from '#domain/quotes/index';
import { isClinicDate } from '#domain/time/index';
import { chooseDay, choosePlan, hasAddOn, sizeDiscount, toggleAddOn } from './edit-draft.ts';
import type { FieldErrors } from './field-errors.ts';

export interface SettingsProps {
  readonly option: OptionDraft;
  readonly book: PriceBook;
  readonly errors: FieldErrors;
  readonly onChange: (next: OptionDraft) => void;
  readonly disabled: boolean;
}

/** What an option is made of beside the eyes: days, package, prices, ways to pay, add-ons, discounts. */
export function OptionSettings(props: SettingsProps) {
  return (
    <div className="border-t border-rule py-4">
      <div className="grid gap-4 sm:grid-cols-2 lg:grid-cols-5">
        <Days {...props} />
        <Choices {...props} />
      </div>
      <div className="mt-4 grid gap-4 lg:grid-cols-5">
        <div className="lg:col-span-3">
          <AddOns {...props} />
        </div>
        <div className="lg:col-span-2">
          <Discounts {...props} />
        </div>
      </div>
    </div>
  );
}

function Days({ option, errors, onChange, disabled }: SettingsProps) {
  const { surgery } = option;
  const both = option.procedures.OD !== null && option.procedures.OS !== null;
  return (
    <>
      {both ? (
        <SelectField
          label="Days"
          value={surgery.plan}
          disabled={disabled}
          onChange={(plan) => onChange(choosePlan(option, plan === 'staged' ? 'staged' : 'same_session'))}
          choices={[
            { value: 'same_session', label: 'Both eyes on one day' },
            { value: 'staged', label: 'One eye after the other' },
          ]}
        />
      ) : null}
      {surgery.plan === 'same_session' ? (
        <DateField
          label="Day of surgery"
          value={surgery.on ?? ''}
          disabled={disabled}
          error={errors.at('surgery.on', 'surgery.on.OD', 'surgery.on.OS')}
          hint={surgery.on === null ? 'Empty while none is agreed' : undefined}
          onChange={(text) => onChange(chooseDay(option, 'both', isClinicDate(text) ? text : null))}
        />
      ) : null}
    </>
  );
}

function Choices({ option, book, errors, onChange, disabled }: SettingsProps) {
  const orNull = (id: string): string | null => (id === '' ? null : id);
  const list = book.priceLists.find((each) => each.id === option.priceListId);
  return (
    <>
      {book.packages.length > 0 ? (
        <SelectField
          label="Package"
          value={option.packageId ?? ''}
          disabled={disabled}
          error={errors.at('packageId')}
          onChange={(id) => onChange({ ...option, packageId: orNull(id) })}
          choices={[
            { value: '', label: 'No package' },
            ...book.packages.map((each) => ({ value: each.id, label: each.label })),
          ]}
        />
      ) : null}
      {book.priceLists.length > 0 ? (
        <SelectField
          label="Prices"
          value={option.priceListId ?? ''}
          disabled={disabled}
          error={errors.at('priceListId')}
          hint={list?.evidence ? `Needs: ${list.evidence}` : undefined}
          onChange={(id) => onChange({ ...option, priceListId: orNull(id) })}
          choices={[
            { value: '', label: 'Standard prices' },
            ...book.priceLists.map((each) => ({ value: each.id, label: each.label })),
          ]}
        />
      ) : null}
      <SelectField
        label="Paid by"
        value={option.paymentPlanId ?? ''}
        disabled={disabled}
        error={errors.at('paymentPlanId')}
        onChange={(id) => onChange({ ...option, paymentPlanId: orNull(id) })}
        choices={[
          { value: '', label: 'Deposit and balance' },
          ...book.paymentPlans.map((each) => ({ value: each.id, label: each.label })),
        ]}
      />
    </>
  );
}

function AddOns({ option, book, errors, onChange, disabled }: SettingsProps) {
  if (book.addOns.length === 0) return null;
  const sides = (addOn: AddOn): readonly Laterality[] =>
    addOn.per === 'eye' ? EYES.filter((eye) => option.procedures[eye] !== null) : ['OU'];
  const errorOf = (addOn: AddOn, side: Laterality): string | undefined => {
    const at = option.addOns.findIndex((each) => each.addOnId === addOn.id && each.laterality === side);
    return at < 0 ? undefined : errors.at(`addOns.${at}`, `addOns.${at}.addOnId`, `addOns.${at}.laterality`);
  };
  return (
    <fieldset>
      <legend className="mb-1 text-small font-semibold">Add-ons</legend>
      <div className="flex flex-wrap gap-x-6">
        {book.addOns.flatMap((addOn) =>
          sides(addOn).map((side) => (
            <CheckField
              key={`${addOn.id}-${side}`}
              disabled={disabled}
              checked={hasAddOn(option, addOn.id, side)}
              error={errorOf(addOn, side)}
              onChange={(wanted) => onChange(toggleAddOn(option, addOn.id, side, wanted))}
              label={
                <>
                  {addOn.label}
                  {side === 'OU' ? '' : `, ${side}`}{' '}
                  <span className="tabular text-small text-soft">
                    {formatAmount(addOn.priceMinor, book.currency)}
                  </span>
                </>
              }
            />
          )),
        )}
      </div>
    </fieldset>
  );
}

function Discounts({ option, book, errors, onChange, disabled }: SettingsProps) {
  const free = book.discounts.filter((rule) => !option.discounts.some((each) => each.discountId === rule.id));
  return (
    <fieldset>
      <legend className="mb-1 text-small font-semibold">Discounts</legend>
      {option.discounts.map((discount, index) => {
        const rule = book.discounts.find((each) => each.id === discount.discountId);
        return (
          <div key={discount.discountId} className="mb-3 flex items-start gap-3">
            <TextField
              label={rule?.reason ?? discount.discountId}
              value={discount.size}
              disabled={disabled}
              inputMode="decimal"
              autoComplete="off"
              className="grow"
              hint={rule ? limitWords(rule, book) : 'No longer in the price book'}
              error={errors.at(`discounts.${index}.off`, `discounts.${index}`)}
              onChange={(size) => onChange(sizeDiscount(option, index, size))}
            />
            <Button
              kind="quiet"
              disabled={disabled}
              aria-label={`Take out ${rule?.reason ?? discount.discountId}`}
              className="mt-6"
              onPress={() =>
                onChange({ ...option, discounts: option.discounts.filter((_, at) => at !== index) })
              }
            >
              Take out
            </Button>
          </div>
        );
      })}
      {free.length > 0 ? (
        <SelectField
          label={<span className="sr-only">Give a discount</span>}
          value=""
          disabled={disabled}
          onChange={(discountId) =>
            onChange({ ...option, discounts: [...option.discounts, { discountId, size: '' }] })
          }
          choices={[
            { value: '', label: 'Give a discount…' },
            ...free.map((rule) => ({ value: rule.id, label: rule.reason })),
          ]}
        />
      ) : null}
    </fieldset>
  );
}

/** "Per cent, up to 5 % by yourself, up to 15 % with approval". */
function limitWords({ off, aftercare }: Discount, book: PriceBook): string {
  const size = (value: number): string =>
    off.kind === 'rate' ? formatRate(value) : formatAmount(value as never, book.currency);
  const [own, approver] =
    off.kind === 'rate' ? [off.ownLimitBp, off.approverLimitBp] : [off.ownLimitMinor, off.approverLimitMinor];
  const limits =
    own === approver
      ? `up to ${size(own)}`
      : `up to ${size(own)} by yourself, ${size(approver)} with approval`;
  return `${off.kind === 'rate' ? 'Per cent' : 'Amount'}, ${limits}${aftercare ? `; ${aftercare.words}` : ''}`;
}
