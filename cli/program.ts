/** The commands, and what becomes of an error that ends one: the exit status. */
import {Command, CommanderError, Option} from "commander";
import {nearestName} from "../lib/acquisition/nearest-name.ts";
import {InputError} from "../lib/errors.ts";
import type {AddCommand} from "./commands/command.ts";
import {messagesTo, report} from "./messages.ts";
import type {Host} from "./nouns.ts";
import {printable, shown} from "./printable.ts";

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

/** What the command-line library found wrong, in the form of every other error. */
function asInputError(error: CommanderError, program: Command): InputError {
  const found = error.message.replace(/^error: /, "").split("\n")[0]!;
  const word = /'([^']*)'/s.exec(error.message)?.[1] ?? "";
  const current = program.commands.find((candidate) => candidate.name() === program.args[0]) ?? program;
  switch (error.code) {
    case "commander.unknownOption": {
      const known = current.options.map((option) => option.long!);
      return new InputError(
        "option/unknown",
        `${printable(word, 60)} is no option here. Nearest is ${nearestName(word.split("=")[0]!, [...known, "--help"])}; groundward ${current === program ? "" : `${current.name()} `}--help lists all.`,
      );
    }
    case "commander.unknownCommand":
      return new InputError(
        "command/unknown",
        `"${printable(word, 60)}" is no command. Nearest is ${nearestName(
          word,
          program.commands.map((candidate) => candidate.name()),
        )}; groundward --help lists all.`,
      );
    case "commander.optionMissingArgument":
      return new InputError("option/missing-value", `${word.split(" ")[0]!} has no value. Write it as ${word}.`);
    case "commander.excessArguments": {
      const [first] = current.args;
      return new InputError(
        "argument/too-many",
        `${current.name()} takes options only, but got ${shown(first ?? "")}. Leave it out; groundward ${current.name()} --help lists all.`,
      );
    }
    default:
      return new InputError(
        "option/refused",
        `${printable(found, 300).replace(/\.$/, "")}. See groundward ${current === program ? "" : `${current.name()} `}--help.`,
      );
  }
}

/** Runs the command line of `host`; @returns the exit status */
export async function groundward(host: Host): Promise<number> {
  const form = {json: host.arguments.includes("--json"), quiet: host.arguments.includes("--quiet")};
  const messages = messagesTo(host, form);
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
    return report(messages, error instanceof CommanderError ? asInputError(error, program) : error);
  }
}
