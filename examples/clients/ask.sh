#!/bin/sh
# Asks a running service (`risefall serve`) from the command line with curl.
# Usage: ask.sh [ADDRESS]
set -eu
address="${1:-http://127.0.0.1:7373}"

echo "One fact for a list of readings:"
curl -fsS "$address/trend/cox-stuart?readings=12;11;13;12;14;13;15;14;16;15&give=p"
echo

echo "The conclusion as text, only a rise sought, words in their order:"
curl -fsS -G "$address/trend/cox-stuart" \
  --data-urlencode "readings=poor;fair;fair;good;fair;good;good;good" \
  --data-urlencode "grades=poor < fair < good" \
  --data-urlencode "seek=rising" --data-urlencode "reply=text"
echo

echo "A range as a macro sends it, row by row, answered as JSON:"
curl -fsS "$address/trend/cox-stuart" -H 'Content-Type: application/json' \
  -d '{"readings": [[3], [4], [null], [5], ["n/a"], [6], [5], [7]], "name": "Waiting"}'
echo

if [ -f "$(dirname "$0")/../hotel/visits.xlsx" ]; then
  echo "The demo workbook comes back annotated:"
  curl -fsS "$address/annotate?wanted=lower" --data-binary "@$(dirname "$0")/../hotel/visits.xlsx" \
    -H 'Content-Type: application/octet-stream' -o visits-trends.xlsx
  ls -l visits-trends.xlsx
fi
