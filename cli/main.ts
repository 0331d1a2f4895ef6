#!/usr/bin/env node
/** The command line: arguments in, exit status out. */
import {runAsProcess} from "./host.ts";
import {groundward} from "./program.ts";

await runAsProcess(groundward);
