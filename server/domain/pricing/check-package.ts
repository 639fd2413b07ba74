import type { Refuse, WantedEye } from './check-input.ts';
import type { CompiledPriceBook } from './compile.ts';
import type { CourseInput } from './course.ts';
import type { Package } from './price-book.ts';

/** The package asked for, when it fits the eyes and procedures. */
export function checkPackage(
  input: CourseInput,
  compiled: CompiledPriceBook,
  eyes: readonly WantedEye[],
  refuse: Refuse,
): Package | null {
  if (input.packageId === null) return null;
  const chosen = compiled.packages.get(input.packageId);
  if (!chosen) {
    const words = `The price book has no package "${input.packageId}".`;
    refuse('packageId', 'unknown_rule', words, 'Choose a package of this book, or none.');
    return null;
  }
  const treated = [input.eyes.OD, input.eyes.OS].filter((wish) => wish !== null).length;
  if (treated > 0 && treated !== (chosen.eyes === 'both' ? 2 : 1)) {
    const words = `${chosen.label} is for ${chosen.eyes === 'both' ? 'both eyes' : 'one eye'}.`;
    refuse('packageId', 'package_does_not_fit', words, 'Choose another package, or none.');
  }
  for (const { eye, procedure } of eyes) {
    if (chosen.procedureIds.includes(procedure.id)) continue;
    refuse(
      `eyes.${eye}.procedureId`,
      'package_does_not_fit',
      `${chosen.label} does not cover ${procedure.label}.`,
      'Choose a procedure of the package, or no package.',
    );
  }
  refuseChangedAftercare(input, compiled, chosen, refuse);
  return chosen;
}

/** A package promises its aftercare; a discount that changes the aftercare would take back what the package says. */
function refuseChangedAftercare(
  input: CourseInput,
  compiled: CompiledPriceBook,
  chosen: Package,
  refuse: Refuse,
): void {
  if (!chosen.includes.aftercare && chosen.includes.coverId === null) return;
  for (const [index, { discountId }] of input.discounts.entries()) {
    const discount = compiled.discounts.get(discountId);
    if (!discount?.aftercare) continue;
    const words = `${discount.reason} changes the aftercare that ${chosen.label} includes.`;
    refuse(`discounts.${index}`, 'package_does_not_fit', words, 'Take the package or the discount.');
  }
}
