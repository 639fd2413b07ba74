import path from 'node:path';

/** The part of Vitest's JSON report that the totals are counted from. */
export interface Report {
  readonly testResults: readonly {
    /** The file's path. */
    readonly name: string;
    readonly status: string;
    readonly assertionResults: readonly { readonly status: string }[];
  }[];
}

export interface Totals {
  readonly passed: number;
  readonly failed: number;
  /** A line a project, then `N passed, N failed`. */
  readonly lines: readonly string[];
}

/**
 * Counts a report by project. A file that failed outside its tests counts as one failure; so does a run that failed
 * though no test did, for instance because a server would not start.
 *
 * @param root the folder `tests` stands in
 * @param clean whether Vitest itself said that all is well
 */
export function totalsOf(
  report: Report,
  projects: readonly string[],
  options: { readonly root: string; readonly clean: boolean },
): Totals {
  const counts = projects.map((project) => {
    const folder = path.join(options.root, 'tests', project) + path.sep;
    return { project, ...countFiles(report.testResults.filter((file) => file.name.startsWith(folder))) };
  });
  const passed = counts.reduce((sum, each) => sum + each.passed, 0);
  const told = counts.reduce((sum, each) => sum + each.failed, 0);
  const failed = told === 0 && !options.clean ? 1 : told;
  const lines = counts.map(
    (each) =>
      `${each.project.padEnd(14)} ${String(each.passed).padStart(5)} passed ${String(each.failed).padStart(5)} failed`,
  );
  return { passed, failed, lines: [...lines, `${passed} passed, ${failed} failed`] };
}

function countFiles(files: Report['testResults']): { passed: number; failed: number } {
  const statuses = files.flatMap((file) => file.assertionResults.map((each) => each.status));
  const outside = files.filter(
    (file) => file.status === 'failed' && !file.assertionResults.some((each) => each.status === 'failed'),
  );
  return {
    passed: statuses.filter((status) => status === 'passed').length,
    failed: statuses.filter((status) => status === 'failed').length + outside.length,
  };
}
