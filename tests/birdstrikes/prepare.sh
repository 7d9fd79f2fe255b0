#!/usr/bin/env bash
# Makes a recording of tests/data/birdstrikes_xy.csv: adds an id and writes the date as a time.
# Usage: tests/birdstrikes/prepare.sh FOLDER
set -euo pipefail
folder=${1:?usage: prepare.sh FOLDER}
here=$(cd "$(dirname "$0")" && pwd)
mkdir -p "$folder"
awk -F, 'NR == 1 { sub(/^date/, "id,time"); print; next } { date = $1; sub(/^[^,]*/, "b" NR - 1 "," date "T00:00:00Z"); print }' \
  "$here/../data/birdstrikes_xy.csv" > "$folder/birdstrikes.csv"
cp "$here/birdstrikes.json" "$folder/"
