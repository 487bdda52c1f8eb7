// What the command tells about itself.

import { usualLimits } from "./within.ts";

export const usage = `lagbook: a notebook for recurring forecasts, in one Markdown file

  lagbook begin DATA.csv          write a first notebook for these data, beside them
  lagbook open NOTEBOOK.md        read and edit it in a browser on this machine
  lagbook verify NOTEBOOK.md      compute everything, and say what failed, broke or moved
  lagbook page NOTEBOOK.md        write it as one HTML file whose controls work offline

begin     --out FILE.md           where to write the notebook (never over a file that is there)
open      --port NUMBER           listen there; left out, the same free port each time where it can be had
verify    --json                  print the whole result as JSON
          --accept                write numbers that moved into the text (not with --set)
          --set NAME=VALUE        move a control first; a JSON value or a text, a window as FROM/TO
          --allow-code            let script cells run
          --seconds NUMBER        stop after so long (${usualLimits.seconds})
          --megabytes NUMBER      stop at so much memory (${usualLimits.megabytes})
page      --set, --allow-code, --seconds, --megabytes   as above
          --out FILE.html         where to write the page (left out: beside the notebook)

Exit code 0: all stands. 1: something failed, broke, moved or is undecided. 2: it could not be run.
lagbook --help prints this, lagbook --version the version.
`;
