/** A life written as a table: from each state, the states that may follow. What is not written is refused. */
export interface StateMachine<State extends string> {
  /** What lives, as refusals name it: "checkout", "till". */
  readonly of: string;
  readonly follows: Readonly<Record<State, readonly State[]>>;
}

export type StepTaken =
  | { readonly ok: true }
  | {
      readonly ok: false;
      /** "till_closed_to_open": what was refused, by name. */
      readonly code: string;
      readonly words: string;
    };

/** Whether something may go from one state to another. Staying where one is, is a step that must be written too. */
export function takeStep<State extends string>(
  machine: StateMachine<State>,
  from: State,
  to: State,
): StepTaken {
  if (machine.follows[from].includes(to)) return { ok: true };
  return {
    ok: false,
    code: `${machine.of}_${from}_to_${to}`,
    words: `A ${machine.of} that is ${from} does not become ${to}.`,
  };
}

/** Every step the table refuses, for tests that must see each of them refused. */
export function refusedSteps<State extends string>(machine: StateMachine<State>): [State, State][] {
  const states = Object.keys(machine.follows) as State[];
  return states.flatMap((from) =>
    states.filter((to) => !machine.follows[from].includes(to)).map((to): [State, State] => [from, to]),
  );
}
