#!/bin/sh
# Sums up gcov's annotated files (*.gcov) in a folder: a line a source with its branches taken, then each source line
# with a branch that no test takes. A header and a function that is compiled several times count once a line: a branch
# is taken if it is taken in any of its copies.
set -eu
cd "$1"
awk '
    /^ *-: *0:Source:/ { file = $0; sub(/.*Source:/, "", file) }
    /^ *[-#0-9=*]+: *[0-9]+:/ {
        split($0, part, ":"); line = part[2] + 0; text = $0; sub(/^[^:]*:[^:]*:/, "", text); number = 0
        texts[file ":" line] = text
    }
    /^branch/ {
        key = file ":" line; branch = key "/" number++
        if (!(branch in seen)) { seen[branch] = 0; all[file]++; lines[++count] = branch; where[branch] = key; of[branch] = file }
        if ($0 !~ /never executed/ && $0 !~ /taken 0( |$)/) seen[branch] = 1
    }
    END {
        for (i = 1; i <= count; i++) { branch = lines[i]; total++; if (seen[branch]) { taken[of[branch]]++; sum++ } }
        for (file in all) printf "%-36s %5d of %5d branches\n", file, taken[file], all[file] | "sort"
        close("sort")
        printf "%-36s %5d of %5d branches, %.2f %%\n", "all", sum, total, 100 * sum / total
        for (i = 1; i <= count; i++) {
            branch = lines[i]
            if (!seen[branch] && !told[where[branch]]++) print where[branch] ": " texts[where[branch]]
        }
    }' *.gcov
