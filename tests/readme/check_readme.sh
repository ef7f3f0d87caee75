#!/usr/bin/env bash
# SPDX-License-Identifier: GPL-3.0-or-later
# Holds the README against the program.
#
#     check_readme.sh geometry PROGRAM   its geometry file is drawn, runs and is judged
#     check_readme.sh words PROGRAM      it names what the program knows
set -euo pipefail
program=$(realpath "${2:?program}")
root=$(realpath "$(dirname "$0")/../..")
folder=$(mktemp -d)
trap 'rm -rf "$folder"' EXIT
"$root/.ci/readme_block" geometry >"$folder/readme.yaml"

check_geometry()
{
    "$program" draw "$folder/readme.yaml" --quiet
    "$program" run "$folder/readme.yaml" --quiet --fineness 0.5
    grep -q 'Verdict: the limit is met' "$folder/readme.result/sheet.txt"
}

# Every word read from standard input must stand in the README between backquotes, or as
# part of what does.
expect_words()
{
    local word missing=0 count=0
    while read -r word; do
        count=$((count + 1))
        grep -qE "\`[^\`]*${word}[^\`]*\`" "$root/README.md" && continue
        echo "README.md does not name $word"
        missing=1
    done
    [ "$count" -ge "$1" ] || { echo "only $count words to look for"; return 1; }
    return $missing
}

# Files of a result: the names of planes stand for <plane>.
result_files()
{
    find "$1" -type f -printf '%f\n' |
        sed -E 's/^(electric|magnetic)_(along|across|turned)\./<plane>./' | sort -u
}

check_words()
{
    for command in run draw; do
        "$program" "$command" --help
    done | grep -oE -- '--[a-z]+' | grep -v -- --help | sort -u | expect_words 4
    # Keys of the geometry file, as its schema lists them.
    sed -nE 's/^ +([a-z_]+): +\{\$ref: .*/\1/p' "$root/geometries/schema.yaml" |
        grep -vx items | sort -u | expect_words 30
    "$program" run "$folder/readme.yaml" --quiet --fineness 0.3 --grids 2 || [ $? -eq 1 ]
    result_files "$folder/readme.result" | expect_words 6
    head -n 1 "$folder/readme.result/path.csv" | tr -d '\r' | tr ',' '\n' |
        grep -v uncertainty | grep -v footprint | expect_words 5
}

"check_$1"
