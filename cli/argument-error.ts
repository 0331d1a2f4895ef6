/** What the command-line library found wrong, in the form of every other error. */
import type {Command, CommanderError} from "commander";
import {nearestName} from "../lib/acquisition/nearest-name.ts";
import {InputError} from "../lib/errors.ts";
import {printable, shown} from "./printable.ts";

export function argumentError(error: CommanderError, program: Command): InputError {
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
