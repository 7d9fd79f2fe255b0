#!/usr/bin/env bash
# Makes recordings of 3,000,000 real flights: flights.jsonl, the same as flights.parquet, and flights-reference.jsonl with the columns of the reference run.
# The data: US Bureau of Transportation Statistics, as data/flights-3m.parquet of the npm package vega-datasets 3.2.1.
# Usage: tests/flights/prepare.sh FOLDER      (needs npm and the .NET SDK; writes about 1 GB)
set -euo pipefail
folder=$(mkdir -p "${1:?usage: prepare.sh FOLDER}" && cd "$1" && pwd)
here=$(cd "$(dirname "$0")" && pwd)
cd "$folder"
if [ ! -s flights-3m.parquet ]; then
  npm pack --silent vega-datasets@3.2.1 >/dev/null
  tar -xzf vega-datasets-3.2.1.tgz --strip-components=2 package/data/flights-3m.parquet
  rm vega-datasets-3.2.1.tgz
fi
dotnet run "$here/Flights.cs" -- flights-3m.parquet plain > flights.jsonl
dotnet run "$here/Flights.cs" -- flights-3m.parquet reference > flights-reference.jsonl
dotnet run "$here/FlightsParquet.cs" -- flights-3m.parquet flights.parquet
cp "$here"/flights*.json .
ls -l "$folder"/*.json*
