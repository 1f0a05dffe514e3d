#!/bin/sh
# Exports, judges and compares the boards of a repository, and leaves the results as files for whoever shows them.
#
#   sh check-boards.sh [-o RESULTS] [-b BASE] [FOLDER]
#
#   FOLDER      where the boards lie; the folder that the script runs in if not given
#   -o RESULTS  the folder of the results; `results` if not given
#   -b BASE     a checkout of what the change is made to, with the boards at the same paths as in FOLDER
#
# RESULTS then holds boards.sarif (SARIF 2.1.0), junit.xml (JUnit XML), boards.md (a comment) and, with a BASE,
# changes.md (a comment on what the change brings and takes away).
#
# Ends with 0 where nothing was found, 1 where there are findings, 2 where not all could be done.
#
# RAILWORTHY and KICAD_CLI name the programs where they are not on the path by their own names.
set -u

railworthy=${RAILWORTHY:-railworthy}
kicad_cli=${KICAD_CLI:-kicad-cli}
results=results
base=

say() { printf '%s\n' "$*" >&2; }

usage() {
    say 'usage: sh check-boards.sh [-o RESULTS] [-b BASE] [FOLDER]'
    exit 2
}

while getopts o:b: option; do
    case $option in
        o) results=$OPTARG ;;
        b) base=$OPTARG ;;
        *) usage ;;
    esac
done
shift $((OPTIND - 1))
[ $# -le 1 ] || usage
folder=${1:-.}

for place in "$folder" ${base:+"$base"}; do
    [ -d "$place" ] || { say "$place is no folder"; exit 2; }
done
command -v "$railworthy" > /dev/null || { say "$railworthy is not here"; exit 2; }
mkdir -p "$results" || exit 2

status=0

# The highest status counts.
count() { [ "$1" -le "$status" ] || status=$1; }

# Exports the netlist of each schematic root below a folder: the sheet with the name of its project. It comes to lie
# beside the schematic, where the board file of its name is found.
export_netlists() {
    find "$1" -name '.[!.]*' -prune -o -type f -name '*.kicad_pro' -print | {
        failed=0
        while IFS= read -r project; do
            stem=${project%.kicad_pro}
            [ -f "$stem.kicad_sch" ] || continue
            "$kicad_cli" sch export netlist --output "$stem.net" "$stem.kicad_sch" < /dev/null >&2 || {
                say "$stem.kicad_sch was not exported"
                failed=2
            }
        done
        exit "$failed"
    }
}

if command -v "$kicad_cli" > /dev/null; then
    export_netlists "$folder" || count 2
    if [ -n "$base" ]; then
        export_netlists "$base" || count 2
    fi
else
    say "$kicad_cli is not here: the netlists are judged as they are"
fi

# Writes a result into a file. It decides nothing, but what cannot be done counts.
write() {
    file=$1
    shift
    "$railworthy" "$@" --output "$results/$file"
    [ $? -le 1 ] || count 2
}

"$railworthy" check "$folder" || count $?
write boards.sarif check "$folder" --quiet --format sarif
write junit.xml check "$folder" --quiet --format junit
write boards.md check "$folder" --quiet --format markdown
if [ -n "$base" ]; then
    write changes.md compare "$base" "$folder" --format markdown
fi

exit "$status"
