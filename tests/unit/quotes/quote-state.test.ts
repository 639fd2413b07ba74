import { describe, expect, test } from 'vitest';
import { type CourseInput, quoteCourse } from '#domain/pricing/index';
import { QUOTE, type QuoteOption, refuseAcceptance, stateOn } from '#domain/quotes/index';
import { refusedSteps, takeStep } from '#domain/state-machine';
import { type ClinicDate, clinicDate } from '#domain/time/index';
import { demoPriceBook } from '#seeds/price-book';
import { courseInput, SURGERY_ON } from '#tests/factories/courses';

const day = clinicDate;

describe('life of a quote', () => {
  test('every step the table does not write · is refused by name', () => {
    const steps = refusedSteps(QUOTE);
    expect(steps).toContainEqual(['accepted', 'withdrawn']);
    expect(steps).toContainEqual(['draft', 'accepted']);
    expect(steps).toHaveLength(25 - 8);
    for (const [from, to] of steps) {
      const step = takeStep(QUOTE, from, to);
      expect(step.ok ? undefined : step.code).toBe(`quote_${from}_to_${to}`);
    }
  });

  test.each([
    ['issued', '2026-04-10', '2026-04-10', 'issued'],
    ['issued', '2026-04-10', '2026-04-11', 'lapsed'],
    ['accepted', '2026-04-10', '2026-05-01', 'accepted'],
    ['draft', null, '2026-05-01', 'draft'],
  ] as const)('%s, good until %s · is on %s %s', (state, until, on, then) => {
    expect(stateOn(state, until === null ? null : day(until), day(on))).toBe(then);
  });
});

const PLAN: CourseInput['approvedPlan'] = {
  approvedBy: 'Dr Brannock',
  approvedOn: day('2026-03-10'),
  expiresOn: day('2026-04-30'),
  procedureIds: { OD: ['lasik'], OS: ['lasik'] },
};

function option(overrides: Partial<CourseInput> = {}): QuoteOption {
  const input = courseInput({ approvedPlan: PLAN, ...overrides });
  const result = quoteCourse(input, demoPriceBook);
  if (!result.ok) throw new Error(result.refusals[0]?.words);
  return { label: 'A', input, priced: result.course, contentHash: '' };
}

function refusal(offered: QuoteOption, on: ClinicDate): string | undefined {
  return refuseAcceptance(offered, demoPriceBook, on)?.reason;
}

describe('acceptance', () => {
  test('under a plan that is good, before surgery · is open to the last day', () => {
    expect(refusal(option(), day('2026-03-12'))).toBeUndefined();
    expect(refusal(option(), SURGERY_ON)).toBeUndefined();
  });

  test('an estimate · waits for the surgeon', () => {
    expect(refusal(option({ approvedPlan: null }), day('2026-03-12'))).toBe('estimate');
  });

  test('after the plan’s last day · waits for the surgeon', () => {
    const later = option({ surgery: { plan: 'same_session', on: null } });
    expect(refusal(later, day('2026-04-30'))).toBeUndefined();
    expect(refusal(later, day('2026-05-01'))).toBe('plan_expired');
  });

  test('after the day of surgery · needs another day', () => {
    expect(refusal(option(), day('2026-04-17'))).toBe('surgery_day_past');
  });

  test('a total that the engine does not give · is refused', () => {
    const honest = option();
    const tampered = {
      ...honest,
      priced: {
        ...honest.priced,
        totalMinor: (honest.priced.totalMinor - 1) as typeof honest.priced.totalMinor,
      },
    };
    expect(refusal(tampered, day('2026-03-12'))).toBe('price_moved');
  });
});
