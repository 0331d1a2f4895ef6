/** The commands, and what becomes of an error that ends one: the exit status. */
import {Command, CommanderError, Option} from "commander";
import type {AddCommand} from "./commands/command.ts";
import type {Host} from "./nouns.ts";

const DESCRIPTION =
  "Carries gravity and magnetic survey lines down to the boundary of their sources and to any level above it, with a bound on the sources and an interval on every answer.";

interface CommandEntry {
  readonly name: string;
  readonly summary: string;
  /** How the help shows what may follow its name; absent: options alone. */
  readonly argument?: string;
  load(): Promise<AddCommand>;
}

const COMMANDS: readonly CommandEntry[] = [
  {
    name: "inspect",
    summary: "what is in the files and what is doubtful",
    argument: "[survey...]",
    load: async () => (await import("./commands/inspect.ts")).inspectCommand,
  },
  {
    name: "continue",
    summary: "sources on the boundary and fields on levels, with intervals",
    argument: "[survey...]",
    load: async () => (await import("./commands/continue.ts")).continueCommand,
  },
  {
    name: "plan",
    summary: "what a survey can promise, before it is flown",
    load: async () => (await import("./commands/plan.ts")).planCommand,
  },
  {
    name: "crossings",
    summary: "differences where lines cross, at the heights flown and at one height",
    argument: "[survey...]",
    load: async () => (await import("./commands/crossings.ts")).crossingsCommand,
  },
  {
    name: "gather",
    summary: "the files of a run that was computed in shards or by workers",
    argument: "[survey...]",
    load: async () => (await import("./commands/gather.ts")).gatherCommand,
  },
  {
    name: "worker",
    summary: "computes lines of runs that wait in a queue",
    load: async () => (await import("./commands/worker.ts")).workerCommand,
  },
  {
    name: "spectrum",
    summary: "what of a source zone can be seen from a height",
    load: async () => (await import("./commands/spectrum.ts")).spectrumCommand,
  },
  {
    name: "schema",
    summary: "the JSON Schema of the job file",
    load: async () => (await import("./commands/schema.ts")).schemaCommand,
  },
];

/** A command of which only its line in the help is wanted. */
function lineOf(own: Command, {argument}: CommandEntry): Command {
  own.addOption(new Option("--options").hideHelp());
  return argument === undefined ? own : own.argument(argument);
}

/** Settings every command shares; its texts go to the host and its errors are thrown. */
function command(name: string, host: Host): Command {
  return new Command(name)
    .exitOverride()
    .showSuggestionAfterError(false)
    .helpOption("-h, --help", "show this help")
    .configureOutput({
      writeOut: (text) => host.out.write(text),
      writeErr: (text) => host.err.write(text),
      outputError: () => undefined,
      getOutHelpWidth: () => Math.min(host.out.columns, 100),
      getErrHelpWidth: () => Math.min(host.err.columns, 100),
      getOutHasColors: () => host.colour,
      getErrHasColors: () => false,
    });
}

/** Runs the command line of `host`; @returns the exit status */
export async function groundward(host: Host): Promise<number> {
  const form = {json: host.arguments.includes("--json"), quiet: host.arguments.includes("--quiet")};
  let status = 0;
  const finish = (result: number): void => {
    status = result;
  };
  const program = command("groundward", host)
    .description(DESCRIPTION)
    .version(host.version, "--version", "print the version")
    .helpCommand("help [command]", "show the help of a command")
    // An option after a command belongs to it: a value such as -400:400 is never taken for one of the program's own.
    .enablePositionalOptions();
  // Only the command that is meant is made with its options; of the others the help shows a line.
  const meant = COMMANDS.find(({name}) => host.arguments.includes(name));
  for (const entry of COMMANDS) {
    const own = command(entry.name, host).summary(entry.summary);
    if (entry === meant) program.addCommand((await entry.load())(() => own, host, finish));
    else program.addCommand(lineOf(own, entry));
  }
  try {
    if (host.arguments.length === 0) {
      host.err.write(program.helpInformation());
      return 2;
    }
    await program.parseAsync([...host.arguments], {from: "user"});
    return status;
  } catch (error) {
    if (error instanceof CommanderError && error.exitCode === 0) return 0;
    const {messagesTo, report} = await import("./messages.ts");
    const found =
      error instanceof CommanderError ? (await import("./argument-error.ts")).argumentError(error, program) : error;
    return report(messagesTo(host, form), found);
  }
}
