#!/usr/bin/env bash
# Writes docker/.env with fresh secrets, once. The text service stays the local fake until you put
# your own account in and take THAWLINE_TEXT_BASE_URL away.
set -euo pipefail

file="$(cd "$(dirname "${BASH_SOURCE[0]}")" && pwd)/.env"
if [[ -e "$file" ]]; then
  echo "$file exists already; nothing was changed." >&2
  exit 1
fi

hex() { od -An -N"$1" -tx1 /dev/urandom | tr -d ' \n'; }

umask 077
cat >"$file" <<END
THAWLINE_PUBLIC_URL=http://localhost:4310
THAWLINE_TRUST_PROXY_HOPS=0
THAWLINE_DB_NAME=thawline
THAWLINE_DB_USER=thawline
THAWLINE_DB_PASSWORD=$(hex 24)
THAWLINE_SESSION_SECRET=$(hex 32)
THAWLINE_TEXT_ACCOUNT=AC$(hex 16)
THAWLINE_TEXT_TOKEN=$(hex 16)
THAWLINE_TEXT_FROM=+12015550100
THAWLINE_TEXT_BASE_URL=http://127.0.0.1:4311
THAWLINE_REGION_ZONE=America/New_York
THAWLINE_AREA_CODE=252
THAWLINE_DEMO=on
END
echo "wrote $file"
