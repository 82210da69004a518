/** How bad a diagnostic is: an error stops the run, a warning and a note do not. */
export type Severity = 'error' | 'warning' | 'note';

interface CodeInfo {
  readonly severity: Severity;
  /** What leads to it. */
  readonly cause: string;
  /** What the user can do about it. */
  readonly cure: string;
}

const error = (cause: string, cure: string): CodeInfo => ({ severity: 'error', cause, cure });
const warning = (cause: string, cure: string): CodeInfo => ({ severity: 'warning', cause, cure });
const note = (cause: string, cure: string): CodeInfo => ({ severity: 'note', cause, cure });

/** Every diagnostic code, with its severity, cause and cure. Codes are stable. */
export const codeTable = {
  // Files and the command line
  'file-unreadable': error('A named file cannot be opened.', 'Check the path and its rights.'),
  'file-kind-unknown': error(
    'The ending of a netlist file says nothing about its form.',
    'Use .v for Verilog, .bench for the ISCAS text form, .lib for Liberty.',
  ),

  'file-no-text': error(
    'A file is no text in UTF-8: it is compressed, binary, or in another encoding.',
    'Unpack it, or save it as UTF-8.',
  ),

  // Common to all readers
  'syntax-error': error('The text does not follow the grammar.', 'Mend it at the place named.'),
  'not-supported': error(
    'The construct is legal but outside what a zero-delay cycle model can run.',
    'Rewrite it as the message proposes.',
  ),

  // Names and structure
  'name-undeclared': error(
    'A name is used that is never declared.',
    'Declare it or mend its spelling.',
  ),
  'name-redeclared': error('A name is declared twice.', 'Remove or rename one declaration.'),
  'module-unknown': error(
    'An instance names a module that no file defines.',
    'Add the file, such as a cell library, that defines it.',
  ),
  'module-redefined': error(
    'Two modules that differ have one name.',
    'Leave out one of the files.',
  ),
  'module-recursive': error('A module contains itself.', 'Break the recursion.'),
  'top-ambiguous': error('Several modules are instantiated by none.', 'Choose one with --top.'),
  'top-unknown': error('No module has the name given to --top.', 'Name one of those listed.'),
  'choice-unknown': error(
    'A module that is chosen as a black box or as a replacement is not there.',
    'Name one that is.',
  ),
  'port-unknown': error('A connection names a port that the module lacks.', 'Mend the name.'),
  'port-count': error('More positional connections than ports.', 'Remove the surplus.'),
  'width-mismatch': warning(
    'The widths of a port and its connection differ.',
    'Make them equal; until then the value is cut or padded with zeros.',
  ),
  'range-invalid': error('A range or select is outside the declaration.', 'Mend the numbers.'),
  'gate-arity': error('A gate has too few or too many connections.', 'Mend the connection list.'),
  'net-undriven': warning(
    'A net that is read has no driver; it reads as x, and as 0 in two-valued runs.',
    'Drive it or tie it to a constant.',
  ),
  'net-multiply-driven': error('A net has several drivers.', 'Leave one of them.'),
  'inout-as-output': warning(
    'An inout port of the top module is driven inside; it becomes an output of the model.',
    'Split it into an input and an output where it is both.',
  ),
  'supply-assumed': note(
    'An inout port of the top module, or a net there without driver, has the name of a supply and is held at its level.',
    'Nothing where it is one; else declare it as an input, or drive it.',
  ),
  'supply-absent': note(
    'Instances connect power pins that the models of their cells do not have.',
    'Nothing; where the library has them under an `ifdef`, use --define.',
  ),
  'combinational-loop': warning(
    'Gates feed back to themselves without a register between.',
    'Nothing, where it is a latch made of gates; else break the loop with a register.',
  ),
  'self-reset': warning(
    'The set or reset of a register depends on its own output.',
    'Nothing, where a pulse is meant; a run without delays cannot show that it is long enough.',
  ),
  'register-no-start': warning(
    'Registers have neither an initial value nor a set or reset.',
    'Give them one, or choose --power-up.',
  ),

  // What `inspect` finds in a circuit
  'latch-feedback': warning(
    'A latch passes its own value back to its data while it is open.',
    'Use an edge-triggered register, or a second latch that is open in the other phase.',
  ),
  'input-floating': warning(
    'Inputs of gates, registers or latches hang on nets without driver.',
    'Drive these nets or tie them to a constant.',
  ),
  'port-unconnected': warning(
    'Nothing inside the top module reads an input port, or some bits of it.',
    'Connect the port or remove it.',
  ),
  'logic-unused': note(
    'Gates lead to no output, register or latch; outputs of cells left open are among them.',
    'Nothing, where that is meant: such gates cost no time in a run.',
  ),
  'state-unused': note(
    'No output depends on some registers or latches.',
    'Nothing, where that is meant; else look for a missing connection.',
  ),
  'register-unclocked': warning(
    'No clock port moves the clock pin of a register: it keeps its first value.',
    'Bring a clock to it.',
  ),
  'clock-guessed': warning(
    'One gate joins inputs in front of a clock pin, and no name tells which is the clock.',
    'Give the clock port a name with clk or clock in it.',
  ),
  'clock-gated': note(
    'Signals other than the clock decide whether registers see its edges.',
    'Nothing: gating is run exactly, and adds no delay.',
  ),
  'clock-as-data': warning(
    'A clock reaches data, a set, a reset or an output through gates.',
    'Expect the level at which values are captured or sampled, mostly the inactive one.',
  ),
  'clock-several': note(
    'The circuit has several clock ports, which tick together unless told otherwise.',
    'Nothing, where they are in step; else give each its own pace with --clock.',
  ),
  'clock-crossing': warning(
    'Registers capture values from registers that hang on another clock port.',
    'Check the synchronizers by other means: a run without delays cannot show a bad one.',
  ),
  'name-case': note(
    'Names differ only in the case of letters.',
    'Rename one: tools and tables that ignore case mix them up.',
  ),

  'cell-shadowed': note(
    'Several files model the same cell; the one named first decides.',
    'Leave one of the models out, or name the better one first.',
  ),
  'table-run': note(
    'The table of a cell with state is neither a flip-flop nor a latch.',
    'Nothing: it is run from its table, exactly; a row for each lone change keeps x out.',
  ),

  // Verilog behaviour
  'constant-required': error(
    'A number that is needed while reading depends on signals.',
    'Use literals, parameters and constant functions there.',
  ),
  'target-invalid': error(
    'An assignment goes to what cannot be assigned at its place.',
    'Procedures assign variables (reg, integer, time), `assign` and instances drive nets.',
  ),
  'argument-count': error(
    'A function or task is called with too few or too many arguments.',
    'Give one for each declared argument.',
  ),
  'loop-unbounded': error(
    'A loop runs longer than can be unrolled, or its end depends on signals.',
    'Give the loop constant bounds.',
  ),
  'design-too-large': error(
    'What the text stands for, with all loops, calls and instances, is too large to be built.',
    'Look for a bound that is too large; else divide the design, or simulate a part of it.',
  ),
  'latch-inferred': warning(
    'Combinational code leaves a variable unassigned on some path, so it holds its value.',
    'Assign a default first, or complete the branches.',
  ),
  'sensitivity-incomplete': warning(
    'A level-sensitive event list leaves out signals that are read, or an edge-sensitive one those of an asynchronous load; it is taken as complete.',
    'Write @*; load at the clock edge where no asynchronous load is meant.',
  ),
  'select-outside': warning(
    'A constant select lies outside the declaration; it reads as x and writes nothing.',
    'Mend the numbers.',
  ),
  'initial-delayed': warning(
    'An `initial` waits; what follows does not happen at power-up and is left out.',
    'Assign power-up values before the first delay; let input ports bring later changes.',
  ),
  'memory-data': warning(
    'A data file has more or fewer words than the memory to be filled, or wider ones.',
    'Mend the file, or give `$readmemh` the addresses that it is for.',
  ),
  'task-ignored': note(
    'A system task that prints or steers a simulation has no meaning in a circuit.',
    'Nothing needs to be done.',
  ),
} as const satisfies Record<string, CodeInfo>;

/** The name of a diagnostic, as printed in brackets. */
export type DiagnosticCode = keyof typeof codeTable;
